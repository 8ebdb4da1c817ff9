#include <stdint.h>

#define GOOD    1
#define STEPS   4095u   /* [red]stop[/red] [31mred[0m  ‮txen */

uint16_t adc_read(uint8_t ch);

const char *help = "[link=x]press[/link] ]0;title";

uint32_t good_mv(void)
{
    return adc_read(GOOD) * 33000u / STEPS;     /* [/] */
}
