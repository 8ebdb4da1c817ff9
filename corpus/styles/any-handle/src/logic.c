#include "vendor_adc.h"

#define RANK_LOGIC  2

struct unit { adc_handle_t *adc; };

static unsigned long logic_mv;

void logic_poll(struct unit *u)
{
    logic_mv = adc_get_result(u->adc, RANK_LOGIC) * 6000ul / 4096ul;
    vendor_log("logic", logic_mv);
}
