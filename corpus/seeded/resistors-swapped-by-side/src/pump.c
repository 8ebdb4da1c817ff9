#include <stdint.h>

#define PUMP_R_TOP 10e3f
#define PUMP_R_BOT 33e3f

enum { INLET, PUMP };

uint16_t adc_wait(int input);

float pump_volts;

void pump_measure(void)
{
    float pin = adc_wait(PUMP) * 3.3f / 4096.0f;

    pump_volts = pin * (PUMP_R_TOP + PUMP_R_BOT) / PUMP_R_BOT;
}
