// What a rule can be refused for, by itself and with the stimulus of its case.
#include <limits>
#include <string>
#include <vector>

#include "oracle/rules/rule.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct Body {
    std::string_view done, stimulus, rules;
};

const std::string_view noise = "shape = \"noise\"\nlength_samples = 4096\n";

const std::vector<Body> bodies = {
    {"bands that are no list", noise, "[[case.rule]]\nkind = \"response\"\nbands = 3\n"},
    {"no band", noise, "[[case.rule]]\nkind = \"response\"\nbands = []\n"},
    {"a band that is a number", noise, "[[case.rule]]\nkind = \"response\"\nbands = [3]\n"},
    {"bands that contradict each other", noise,
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 0, to_hz = 50, max_db = -3 },\n"
     "         { from_hz = 50, to_hz = 90, min_db = -1 }]\n"},
    {"bands that contradict each other in a range", noise,
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 0, to_hz = 70, max_db = -3 },\n"
     "         { from_hz = 50, to_hz = 90, min_db = -1 }]\n"},
    {"a response of a step", "shape = \"step\"\nlength_samples = 256\n",
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 1, to_hz = 9, max_db = 1 }]\n"},
    {"a response of a short noise", "shape = \"noise\"\nlength_samples = 63\n",
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 1, to_hz = 90, max_db = 1 }]\n"},
    {"a response between the bins", noise,
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 10.1, to_hz = 10.2, max_db = 1 }]\n"},
    {"a response of one realisation", "shape = \"sine\"\nlength_samples = 4096\nfrequency_hz = 50\n",
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 40, to_hz = 90, max_db = 1 }]\n"},
    {"a response where the sine is not",
     "shape = \"sine\"\nlength_samples = 4096\nfrequency_hz = 50\nrealisations = 16\n",
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 60, to_hz = 90, max_db = 1 }]\n"},
    {"a response of tones that lie too close",
     "shape = \"multitone\"\nlength_samples = 256\nfrequencies_hz = [50, 51]\n",
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 40, to_hz = 90, max_db = 1 }]\n"},
    {"a response of tones that lie too close in a realisation",
     "shape = \"multitone\"\nlength_samples = 4096\nfrequencies_hz = [50, 60]\nrealisations = 16\n",
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 40, to_hz = 90, max_db = 1 }]\n"},
    {"two latencies", noise,
     "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\n[[case.rule]]\nkind = \"latency\"\nlatency_samples = "
     "1\n"},
    {"a latency that the window does not reach", noise, "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 65\n"},
    {"a latency of a short case", "shape = \"noise\"\nlength_samples = 8\n",
     "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 20\n"},
    {"a latency of a step that is too low", "shape = \"step\"\nlength_samples = 256\nlevel_codes = 3\n",
     "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\n"},
    {"a latency that nothing tells within the limits", noise,
     "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\n[[case.rule]]\nkind = \"error\"\nrms_lsb = 30000\n"},
    {"a latency of a long case that begins in silence",
     "shape = \"impulse\"\nlength_samples = 300000\nat_samples = 299999\n",
     "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\n"},
    {"a tone without a limit", noise, "[[case.rule]]\nkind = \"tone\"\n"},
    {"a tone in noise", noise, "[[case.rule]]\nkind = \"tone\"\nmin_sinad_db = 60\n"},
    {"a tone in a short record", "shape = \"sine\"\nfrequency_hz = 50\nlength_samples = 70\n",
     "[[case.rule]]\nkind = \"tone\"\nmin_sinad_db = 60\n"},
    {"a tone at half the rate", "shape = \"sine\"\nfrequency_hz = 600\nphase_turns = 0.25\nlength_samples = 4096\n",
     "[[case.rule]]\nkind = \"tone\"\nmin_sinad_db = 60\n"},
    {"a tone that the filter takes away", "shape = \"sine\"\nfrequency_hz = 300\nlength_samples = 4096\n",
     "[[case.rule]]\nkind = \"tone\"\nmin_sinad_db = 60\n"},
    {"a tone whose harmonics fold onto it", "shape = \"sine\"\nfrequency_hz = 400\nlength_samples = 4096\n",
     "[[case.rule]]\nkind = \"tone\"\nmax_thd_db = -60\n"},
    {"a transition without a limit", noise, "[[case.rule]]\nkind = \"transition\"\n"},
    {"a rise and a fall", "shape = \"step\"\nat_samples = 64\nlength_samples = 256\n",
     "[[case.rule]]\nkind = \"transition\"\nmax_rise_samples = 4\nmax_fall_samples = 4\n"},
    {"a transition of silence", "shape = \"silence\"\nlength_samples = 256\n",
     "[[case.rule]]\nkind = \"transition\"\nmax_rise_samples = 4\n"},
    {"a transition at once", "shape = \"step\"\nat_samples = 4\nlength_samples = 256\n",
     "[[case.rule]]\nkind = \"transition\"\nmax_rise_samples = 4\n"},
    {"a fall of a rising step", "shape = \"step\"\nat_samples = 64\nlength_samples = 256\n",
     "[[case.rule]]\nkind = \"transition\"\nmax_fall_samples = 4\n"},
    {"a rise of a falling step", "shape = \"step\"\nlevel_ratio = -0.5\nat_samples = 64\nlength_samples = 256\n",
     "[[case.rule]]\nkind = \"transition\"\nmax_rise_samples = 4\n"},
    {"a transition that ends at once", "shape = \"step\"\nat_samples = 64\nlength_samples = 66\n",
     "[[case.rule]]\nkind = \"transition\"\nmax_rise_samples = 4\n"},
    {"a transition of a few codes", "shape = \"step\"\nlevel_codes = 8\nat_samples = 64\nlength_samples = 256\n",
     "[[case.rule]]\nkind = \"transition\"\nmax_rise_samples = 4\n"},
    {"an overshoot of less than a code", "shape = \"step\"\nat_samples = 64\nlength_samples = 256\n",
     "[[case.rule]]\nkind = \"transition\"\nmax_overshoot_percent = 0.001\n"},
    {"an error without a limit", noise, "[[case.rule]]\nkind = \"error\"\n"},
    {"a limit twice", noise, "[[case.rule]]\nkind = \"error\"\nmax_lsb = 1\nmax_ratio = 0.1\n"},
    {"a silence rule without a limit", noise, "[[case.rule]]\nkind = \"silence\"\n"},
    {"silence of a stimulus that never ends", noise, "[[case.rule]]\nkind = \"silence\"\nmax_lsb = 1\n"},
    {"too little silence", "shape = \"impulse\"\nlength_samples = 100\nat_samples = 60\n",
     "[[case.rule]]\nkind = \"silence\"\nmax_lsb = 1\n"},
    {"a noise rule without a limit", noise, "[[case.rule]]\nkind = \"noise\"\n"},
    {"a noise gain twice", noise, "[[case.rule]]\nkind = \"noise\"\nmax_gain_db = -6\nmax_gain = 0.25\n"},
    {"noise gains that cross", noise, "[[case.rule]]\nkind = \"noise\"\nmin_gain_db = -5\nmax_gain_db = -6\n"},
    {"a noise gain of a step", "shape = \"step\"\nlength_samples = 4096\n",
     "[[case.rule]]\nkind = \"noise\"\nmax_gain_db = -6\n"},
    {"a noise gain of noise with a step added",
     "shape = \"noise\"\nlength_samples = 4096\nadd = [{ shape = \"step\", level_ratio = 0.1 }]\n",
     "[[case.rule]]\nkind = \"noise\"\nmax_gain_db = -6\n"},
    {"a noise gain of a short noise", "shape = \"noise\"\nlength_samples = 300\n",
     "[[case.rule]]\nkind = \"noise\"\nmax_gain_db = -6\n"},
    {"a drift rule without a limit", noise, "[[case.rule]]\nkind = \"drift\"\n"},
    {"a slope that rounding may feign", noise, "[[case.rule]]\nkind = \"drift\"\nmax_slope_lsb_per_hour = 60\n"},
    {"no slope at all", noise, "[[case.rule]]\nkind = \"drift\"\nmax_slope_lsb_per_hour = 0\n"},
    {"a change that rounding may feign", noise, "[[case.rule]]\nkind = \"drift\"\nmax_change_lsb = 1\n"},
    {"a drift of a short case", "shape = \"noise\"\nlength_samples = 200\n",
     "[[case.rule]]\nkind = \"drift\"\nmax_change_lsb = 2\n"},
    {"a response without limits", noise, "[[case.rule]]\nkind = \"response\"\n"},
    {"a band filter's mask without its middle", noise,
     "[[case.rule]]\nkind = \"response\"\nmask = \"octave class 1\"\n"},
    {"a middle of a weighting", noise,
     "[[case.rule]]\nkind = \"response\"\nmask = \"a-weighting class 1\"\nmid_hz = 100\n"},
    {"a mask without limits", noise, "[[case.rule]]\nkind = \"response\"\nmask = \"k-weighting\"\n"},
    {"a tolerance beside limits", noise,
     "[[case.rule]]\nkind = \"response\"\nmask = \"a-weighting class 1\"\ntolerance_db = 1\n"},
    {"a reference beside the middle of a band", noise,
     "[[case.rule]]\nkind = \"response\"\nmask = \"octave class 1\"\nmid_hz = 100\nreference_hz = 50\n"},
    {"a gain of K weighting without its frequency", noise,
     "[[case.rule]]\nkind = \"response\"\nmask = \"k-weighting\"\ntolerance_db = 1\nreference_db = 0\n"},
    {"a reference where K weighting is not known", noise,
     "[[case.rule]]\nkind = \"response\"\nmask = \"k-weighting\"\ntolerance_db = 1\nreference_hz = 1e-200\n"},
    {"a standard's mask relative to the design", noise,
     "[[case.rule]]\nkind = \"response\"\nmask = \"a-weighting class 1\"\nrelative_to = \"design\"\n"},
    {"a word of a mask without one", noise, "[[case.rule]]\nkind = \"response\"\nmax_phase_deg = 1\nmid_hz = 100\n"},
    {"a mask above Nyquist", noise, "[[case.rule]]\nkind = \"response\"\nmask = \"octave class 1\"\nmid_hz = 1000\n"},
    {"a mask where the sine is not", "shape = \"sine\"\nlength_samples = 16384\nfrequency_hz = 5\nrealisations = 16\n",
     "[[case.rule]]\nkind = \"response\"\nmask = \"a-weighting class 1\"\n"},
    {"a mask of a standard that is none", noise,
     "[[case.rule]]\nkind = \"response\"\nmask = \"b-weighting class 1\"\n"},
    {"a word about phase limits without one", noise,
     "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 1, to_hz = 90, max_db = 1 }]\ndelta_deg = 1\n"},
    {"a least delay relative to the design", noise,
     "[[case.rule]]\nkind = \"response\"\nmin_group_delay_samples = 1\n"},
    {"no difference in delay at all", noise, "[[case.rule]]\nkind = \"response\"\nmax_group_delay_samples = 0\n"},
    {"delays that cross", noise,
     "[[case.rule]]\nkind = \"response\"\nmin_group_delay_samples = 2\nmax_group_delay_samples = 1\nphase_relative_to "
     "= \"absolute\"\n"},
    {"half a range of the phase", noise, "[[case.rule]]\nkind = \"response\"\nmax_phase_deg = 1\nphase_to_hz = 10\n"},
    {"a range of the phase and a passband", noise,
     "[[case.rule]]\nkind = \"response\"\nmax_phase_deg = 1\nphase_from_hz = 1\nphase_to_hz = 10\npassband_db = 1\n"},
    {"a range of the phase that runs backwards", noise,
     "[[case.rule]]\nkind = \"response\"\nmax_phase_deg = 1\nphase_from_hz = 20\nphase_to_hz = 10\n"},
    {"a range of the phase above Nyquist", noise,
     "[[case.rule]]\nkind = \"response\"\nmax_phase_deg = 1\nphase_from_hz = 20\nphase_to_hz = 601\n"},
    {"a group delay of too few bins", noise,
     "[[case.rule]]\nkind = \"response\"\nmax_group_delay_samples = 1\nphase_from_hz = 20\nphase_to_hz = 21\n"},
    {"a fraction of a latency of a chirp", "shape = \"chirp\"\nfrom_hz = 10\nto_hz = 500\nlength_samples = 4096\n",
     "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\nmax_fraction_samples = 0.1\n"},
    {"a limit in a unit that is nowhere explained", noise, "[[case.rule]]\nkind = \"error\"\nmax_unit = 1\n"},
};

/// Of words that never went through a plan: the reader has refused most of these before.
void show_words(Page& page) {
    const RuleContext context{1200.0, true, 32768.0, std::nullopt};
    page.show("a kind that is none", make_rule("wavelet", {}, context));
    const auto band = [&](std::string_view done, std::vector<double> row) {
        ParameterValues values;
        values.set("bands", std::vector<std::vector<double>>{std::move(row)});
        page.show(done, make_rule("response", values, context));
    };
    constexpr double none = std::numeric_limits<double>::infinity();
    band("a band of three numbers", {1.0, 2.0, 3.0});
    band("a band that runs backwards", {90.0, 10.0, -1.0, 1.0});
    band("a band above Nyquist", {90.0, 700.0, -1.0, 1.0});
    band("a band without a limit", {10.0, 90.0, -none, none});
    band("limits that cross", {10.0, 90.0, 1.0, -1.0});
    ParameterValues values;
    values.set("bands", std::vector<std::vector<double>>{});
    page.show("no band", make_rule("response", values, context));
}

}  // namespace

void rule_chapter(Page& page) {
    page.chapter("The rules");
    for (const Body& body : bodies) {
        Parts parts;
        parts.stimulus = body.stimulus;
        parts.after = body.rules;
        show_plan(page, body.done, parts.text());
    }
    Parts parts;
    parts.rule = "kind = \"latency\"\nlatency_samples = 0\n";
    parts.stimulus = "shape = \"silence\"\nlength_samples = 256\n";
    show_plan(page, "a latency of all cases that none can tell", parts.text());
    parts = {};
    parts.rule = "kind = \"response\"\nbands = [{ from_hz = 10, to_hz = 500, max_db = 3 }]\n";
    parts.of_case = "rate_hz = 600.0\n";
    show_plan(page, "a band of all cases above Nyquist of one", parts.text());
    parts = {};
    parts.filter = "kind = \"median\"\npoints = 5\n";
    parts.rule = "kind = \"response\"\nbands = [{ from_hz = 10, to_hz = 500, max_db = 3 }]\n";
    show_plan(page, "a response of a median", parts.text());
    const std::string tone = "[[case.rule]]\nkind = \"tone\"\nmin_sinad_db = 60\n";
    const std::string sine = "shape = \"sine\"\nlength_samples = 4096\nfrequency_hz = ";
    const std::string transition = "[[case.rule]]\nkind = \"transition\"\nmax_fall_samples = 9\n";
    const std::string square = "shape = \"square\"\nperiod_samples = 300\nlength_samples = 900\n";
    parts = {};
    parts.filter = "kind = \"one-pole\"\ncorner_hz = 0.0001\n";
    parts.stimulus = sine + "50\n";
    parts.after = tone;
    show_plan(page, "a tone through a filter that forgets too slowly", parts.text());
    parts.stimulus = square;
    parts.after = transition;
    show_plan(page, "a step down through a filter that forgets too slowly", parts.text());
    parts.stimulus = "shape = \"step\"\nat_samples = 64\nlength_samples = 900\n";
    parts.after = "[[case.rule]]\nkind = \"transition\"\nfinal_lsb = 9\n";
    show_plan(page, "a step through a filter that forgets too slowly", parts.text());
    parts.filter = "kind = \"dc-blocker\"\npole = 0.9\n";
    show_plan(page, "a step through a filter that keeps nothing of it", parts.text());
    parts.filter = "kind = \"cic-decimator\"\norder = 2\nfactor = 4\n";
    parts.stimulus = sine + "200\n";
    parts.after = tone;
    show_plan(page, "a tone that a decimator folds", parts.text());
    parts = {};
    parts.signal = "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"f32\"\n";
    show_plan(page, "a limit in steps of a float format", parts.text());
    parts = {};
    parts.rule = "kind = \"error\"\nmax_lsb = \"derived\"\n";
    parts.signal = "rate_hz = 1200.0\ninput = \"q15\"\noutput = \"i16\"\noutput_per_input = 30000.0\n";
    show_plan(page, "a derived limit behind a gain that is no power of two", parts.text());
    parts.signal = Parts{}.signal;
    parts.filter = "kind = \"one-pole\"\nshift_bits = 3\ninitial = \"first-sample\"\n";
    show_plan(page, "a derived limit of a preloaded recursion", parts.text());
    parts = {};
    parts.filter = "kind = \"biquad-cascade\"\nsections = [[1.0, 0.0, 0.0, -1.9999999, 0.9999999]]\n";
    parts.stimulus = "shape = \"impulse\"\nlength_samples = 4096\n";
    parts.rule = "kind = \"silence\"\nmax_lsb = 1\n";
    show_plan(page, "silence of a filter whose tail has no end", parts.text());
    parts.stimulus = Parts{}.stimulus;
    parts.rule = "kind = \"noise\"\nmax_gain_db = 1\n";
    show_plan(page, "a noise gain of a filter that never settles", parts.text());
    parts = {};
    parts.of_case = "start = \"running\"\ndiscard_samples = 64\n";
    parts.after = "[[case.rule]]\nkind = \"unchanged\"\n";
    show_plan(page, "an unchanged response of a case that starts running", parts.text());
    parts = {};
    parts.filter = "kind = \"unknown\"\n";
    parts.rule = "kind = \"unchanged\"\nmax_lsb = 0\n";
    show_plan(page, "no rule left",
              spoilt(parts.text(), "[[rule]]\nkind = \"unchanged\"\nmax_lsb = 0\n", "") +
                  "[[case]]\nname = \"second\"\n[case.stimulus]\nshape = \"step\"\n"
                  "length_samples = 9\n[[case.rule]]\nkind = \"unchanged\"\n");
    page.chapter("The rules, made without a plan");
    show_words(page);
}

}  // namespace halflsb::diagnostics
