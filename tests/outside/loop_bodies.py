"""Request bodies for the loop shift check: plain ones to vary, and ones of the right shape with unreasonable numbers."""
from hypothesis import strategies as st

from .loops import CONNECTIONS


def voltmeter(ohms):
    """A voltage input."""
    return {"function": "voltage", "input_resistance_ohm": ohms}


def milliammeter(ohms):
    """A current input."""
    return {"function": "current", "burden_resistance_ohm": ohms}


def two_wire(connection, instrument, milliamps=12, **more):
    """A 24 V loop with a 12 V transmitter and 250 ohm."""
    body = {"loop": "two-wire", "connection": connection, "signal": "4-20-ma", "instrument": instrument, "supply": {"voltage_volt": 24},
            "liftoff": {"voltage_volt": 12}, "receiver": {"resistance_ohm": 250}, "transmitter": {"output_current_ampere": milliamps / 1000}}
    return {**body, **more}


def spread_of(value_strategy):
    """A number as a request may state it: plain or with one of its spreads."""
    return st.one_of(value_strategy, value_strategy, st.builds(lambda v, p: {"value": v, "half_width_percent": p}, value_strategy, st.floats(0, 100)),
                     st.builds(lambda a, b: {"between": [a, b]}, value_strategy, value_strategy))


ohms_of_any_size = spread_of(st.one_of(st.floats(1e-300, 1e6), st.floats(1, 1e4)))
amps, volts = spread_of(st.one_of(st.floats(0, 1), st.just(0.0))), spread_of(st.one_of(st.floats(0, 1000), st.just(0.0)))
process_values = spread_of(st.floats(-1e6, 1e6))


def some_of(draw, **fields):
    """An object with some of the fields."""
    return {key: draw(strategy) for key, strategy in fields.items() if draw(st.booleans())}


@st.composite
def any_body(draw):
    """Bodies of the right shape with unreasonable numbers."""
    loop = draw(st.sampled_from(list(CONNECTIONS)))
    body = {"loop": loop, "connection": draw(st.sampled_from(CONNECTIONS[loop])), "receiver": {"resistance_ohm": draw(ohms_of_any_size)},
            "signal": draw(st.sampled_from(["4-20-ma", "0-20-ma", "1-5-v", "0-10-v"])),
            "process": some_of(draw, level_percent=st.floats(-100, 200), value_process_unit=process_values, low_process_unit=st.floats(-10, 10),
                               high_process_unit=st.floats(-10, 10), scaling=st.sampled_from(["linear", "square-root"]), unit=st.just("bar")),
            "wire": some_of(draw, resistance_ohm=ohms_of_any_size, length_metre=st.floats(0, 1e6), conductor=st.just("awg-18-solid"),
                            temperature_celsius=st.floats(-100, 300), cable=st.just("twisted-pair-1-mm2")),
            "controller": some_of(draw, gain_ratio=st.floats(0, 1e4), integral_time_second=st.floats(1e-300, 1e6), in_manual=st.booleans())}
    function = draw(st.sampled_from(["voltage", "current", "clamp", "injector"]))
    fields = {"voltage": ("input_resistance_ohm", "cold_resistance_ohm"), "current": ("burden_resistance_ohm",)}.get(function, ())
    body["instrument"] = {"function": function, **some_of(draw, **{name: ohms_of_any_size for name in fields})}
    levels = {"level_percent": spread_of(st.floats(-100, 200)), "value_process_unit": process_values}
    if loop == "voltage-signal":
        body["transmitter"] = some_of(draw, output_voltage_volt=volts, current_limit_ampere=st.floats(1e-9, 10))
        body["transmitter"]["output_resistance_ohm"] = draw(ohms_of_any_size)
    else:
        body["transmitter"] = some_of(draw, output_current_ampere=amps, top_current_ampere=st.floats(1e-300, 1))
        body |= some_of(draw, bridged=st.booleans(), gap_time_second=st.floats(1e-9, 1e6))
        body["communication"] = some_of(draw, used=st.booleans(), device_capacitance_farad=st.floats(0, 1))
        body["test_diode"] = some_of(draw, forward_voltage_volt=st.floats(1e-9, 5))
        body["receiver"] |= some_of(draw, on_failure=st.sampled_from(["follows", "low", "high", "holds"]))
        levels["current_ampere"] = amps
    if loop == "two-wire":
        body["supply"] = some_of(draw, voltage_volt=volts, resistance_ohm=ohms_of_any_size, current_limit_ampere=st.floats(1e-9, 10))
        body["liftoff"] = some_of(draw, voltage_volt=volts, low_current_ampere=st.floats(0, 1), low_voltage_volt=volts,
                                  high_current_ampere=st.floats(0, 1), high_voltage_volt=volts)
    body |= some_of(draw, limit_percent=st.floats(1e-9, 99), safety_function=st.booleans(), contact_time_second=st.floats(1e-9, 1e6))
    body["setpoints"] = [{"label": "x", "direction": draw(st.sampled_from(["rising", "falling"])), "action": draw(st.sampled_from(["alarm", "trip"])),
                          **some_of(draw, **levels), **some_of(draw, delay_second=st.floats(0, 100))} for _ in range(draw(st.integers(0, 3)))]
    return body
