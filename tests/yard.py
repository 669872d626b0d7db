"""A small recipe with every number given: its pack is built in seconds, without tuning."""

YARD = """\
name = "yard-5g8"
quantity = 6

[target]
band = ["5.725 GHz", "5.875 GHz"]
return_loss = "14 dB"

[radiator]
family = "biquad"
wire = "1.0 mm"
side = "12.85 mm"
lobe_angle = "60.5 deg"
standoff = "9.7 mm"
feed_gap = "3.9 mm"

[feed]
style = "tube"
tube = "tube-2.2"

[reflector]
material = "laminate"
thickness = "1.6 mm"
base = ["52 mm", "52 mm"]

[cutter]
process = "waterjet"

[printer]
nozzle = "0.25 mm"
clearance = "0.15 mm"
"""
