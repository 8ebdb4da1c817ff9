#include <stdint.h>

#define CH_CHILLER      6
#define SENSOR_FAULT    (-9999)
#define CODE_OPEN       2500
#define CODE_SHORT      100

int adc_get(int ch);

int16_t chiller_x10(void)
{
    int code = adc_get(CH_CHILLER);

    if (code < CODE_SHORT || code > CODE_OPEN)
        return SENSOR_FAULT;
    return (int16_t)(code * 3300L / 4096 - 500);
}
