#include <stdint.h>
#include "analog.h"

#define AS_INPUT(name, times) AIN_##name,
enum { ANALOG_ROWS(AS_INPUT) AIN_COUNT };

extern volatile uint16_t adc_raw[AIN_COUNT];

#define AS_FUNCTION(name, times) \
    uint32_t FUNCTION_##name(void) { return (uint32_t)adc_raw[AIN_##name] * 3300u * (times) / 4096u; }
#define FUNCTION_BATTERY battery_mv
#define FUNCTION_SOLAR solar_mv
#define FUNCTION_RAIL rail_mv

ANALOG_ROWS(AS_FUNCTION)
