#include <stdint.h>
#define CODE_TOP 65535.0f

uint16_t adc_take(void);
float probe_volts;

void probe_poll(void)
{
    probe_volts = adc_take() * (3.3f / CODE_TOP) * 2.0f;
}
