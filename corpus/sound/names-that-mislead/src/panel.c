#include <stdint.h>

#define ADC_MAX         100         /* brightness, percent */
#define VREF_TIMEOUT    1023        /* ms until the reference has settled */
#define DIVIDER         8           /* clock prescaler */
#define FULL_SCALE      255         /* lamp PWM */
#define RESOLUTION      8           /* display columns */

enum alarm { SHUNT_TRIP = 4095, LEVEL_LOW };

uint16_t adc_get(uint8_t ch);

static volatile uint16_t rail_mv;

void lamp(uint8_t percent)
{
    if (percent > ADC_MAX)
        percent = ADC_MAX;
    pwm_write(percent * FULL_SCALE / 100);
}

void panel_init(void)
{
    clock_prescale(DIVIDER);
    delay_ms(VREF_TIMEOUT);
    display_columns(RESOLUTION);
}

void panel_tick(void)
{
    rail_mv = (uint16_t)(adc_get(0) * 3300ul * 4 / 4096);
    if (rail_mv < 9000)
        alarm_raise(LEVEL_LOW);
    else
        alarm_clear(SHUNT_TRIP);
}
