/* What a program outside the tree needs: a netlist from memory, swept, one entry read. */
#include <anabranch.h>
#include <math.h>
#include <stdio.h>
#include <string.h>

int main(void) {
    static const char text[] = "port a, b: 50 ohm\na -- 100 ohm -- b\nsweep at 1 GHz\n"; // S21 is 1/2
    anb_context *context = anb_context_new();
    anb_netlist *netlist = NULL;
    anb_data *data = NULL;
    double s[2] = {NAN, NAN};
    if (context && anb_netlist_parse(context, "divider", text, strlen(text), NULL, &netlist) == ANB_OK &&
        anb_sweep(context, netlist, NULL, &data) == ANB_OK)
        anb_data_s(data, 0, 1, 0, s);
    anb_data_free(data);
    anb_netlist_free(netlist);
    anb_context_free(context);
    printf("%s %.12f %.12f\n", anb_version(), s[0], s[1]);
    return fabs(s[0] - 0.5) < 1e-12 && fabs(s[1]) < 1e-12 ? 0 : 1;
}
