#include <stdint.h>

#define VIN_CH      2
#define SPARE_CH    5

uint16_t adc_read(uint8_t ch);

uint32_t vin_mv(void)
{
    return adc_read(VIN_CH) * 6600u / 4096u;
}
