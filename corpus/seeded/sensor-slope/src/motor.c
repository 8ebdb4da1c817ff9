#include <stdint.h>

#define SENSOR_ZERO_UV      400000
#define SENSOR_UV_PER_DEGC  20000

uint16_t adc_code(uint8_t ch);

int32_t motor_mdegc(void)
{
    int64_t uv = (int64_t)adc_code(6) * 3300000 / 4096;

    return (int32_t)((uv - SENSOR_ZERO_UV) * 1000 / SENSOR_UV_PER_DEGC);
}
