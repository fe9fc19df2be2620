// What a filter and its arithmetic can be refused for.
#include <string>
#include <vector>

#include "oracle/filters/filter.hpp"
#include "oracle/filters/stage_arithmetic.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct Body {
    std::string_view done;
    std::string filter;
};

std::string ones(int count) {
    std::string list = "1.0";
    for (int i = 1; i < count; ++i) list += ", 1.0";
    return list;
}

const std::vector<Body> bodies = {
    {"no points", "kind = \"moving-average\"\n"},
    {"too many points", "kind = \"moving-average\"\npoints = 70000\n"},
    {"neither taps nor a file of them", "kind = \"fir\"\n"},
    {"taps and a file of them", "kind = \"fir\"\ntaps = [1.0]\ntaps_file = \"taps.txt\"\n"},
    {"taps that are all 0", "kind = \"fir\"\ntaps = [0.0, 0.0]\n"},
    {"a tap that is too large", "kind = \"fir\"\ntaps = [1e40]\n"},
    {"a number for a file of taps", "kind = \"fir\"\ntaps_file = 3\n"},
    {"a file of taps with a word in it", "kind = \"fir\"\ntaps_file = \"words.txt\"\n"},
    {"a file of taps with nothing in it", "kind = \"fir\"\ntaps_file = \"empty.txt\"\n"},
    {"a file of taps with a NaN in it", "kind = \"fir\"\ntaps_file = \"nan.txt\"\n"},
    {"a file of taps with a number that is too large", "kind = \"fir\"\ntaps_file = \"large.txt\"\n"},
    {"a file of taps that is no text", "kind = \"fir\"\ntaps_file = \"binary.txt\"\n"},
    {"no section", "kind = \"biquad-cascade\"\nsections = []\n"},
    {"sections that are one list of numbers", "kind = \"biquad-cascade\"\nsections = [1, 0, 0, 0, 0]\n"},
    {"sections that are a string", "kind = \"biquad-cascade\"\nsections = \"1 0 0 0 0\"\n"},
    {"a section of four numbers", "kind = \"biquad-cascade\"\nsections = [[1, 0, 0, 0]]\n"},
    {"a section whose a0 is not 1", "kind = \"biquad-cascade\"\nsections = [[2, 0, 0, 2, 0.5, 0.5]]\n"},
    {"a section that passes nothing", "kind = \"biquad-cascade\"\nsections = [[0, 0, 0, 0.5, 0.5]]\n"},
    {"an unstable section", "kind = \"biquad-cascade\"\nsections = [[1, 0, 0, -2.1, 1.05]]\n"},
    {"a section with the signs of another book", "kind = \"biquad-cascade\"\nsections = [[1, 0, 0, 1.5, -0.6]]\n"},
    {"a file of sections with six numbers", "kind = \"biquad-cascade\"\nsections_file = \"six.txt\"\n"},
    {"a one-pole without a coefficient", "kind = \"one-pole\"\n"},
    {"a one-pole with two coefficients", "kind = \"one-pole\"\ncoefficient = 0.5\ncorner_hz = 10.0\n"},
    {"a corner at Nyquist", "kind = \"one-pole\"\ncorner_hz = 600.0\n"},
    {"a corner that is too low", "kind = \"one-pole\"\ncorner_hz = 1e-8\n"},
    {"a time constant that is too long", "kind = \"one-pole\"\ntime_constant_s = 1e7\n"},
    {"a shift with fraction bits", "kind = \"one-pole\"\nshift_bits = 4\ncoefficient_fraction_bits = 15\n"},
    {"a coefficient that rounds to 0", "kind = \"one-pole\"\ncoefficient = 0.001\ncoefficient_fraction_bits = 8\n"},
    {"a pole that rounds to 1", "kind = \"dc-blocker\"\npole = 0.9999\ncoefficient_fraction_bits = 8\n"},
    {"a blocker with both of its words", "kind = \"dc-blocker\"\npole = 0.99\ncorner_hz = 1.0\n"},
    {"a notch above Nyquist", "kind = \"notch\"\nfrequency_hz = 700.0\nq = 5.0\n"},
    {"a notch without its width", "kind = \"notch\"\nfrequency_hz = 50.0\n"},
    {"a notch that is too narrow", "kind = \"notch\"\nfrequency_hz = 1e-8\nq = 1e6\n"},
    {"a comb that is unstable", "kind = \"comb\"\ndelay_samples = 8\nfeedback = -1.0\n"},
    {"a comb that passes nothing", "kind = \"comb\"\ndelay_samples = 8\ndirect = 0.0\nfeedback = 0.5\n"},
    {"a comb that delays nothing", "kind = \"comb\"\ndelay_samples = 8\n"},
    {"a recursion of too high an order", "kind = \"iir\"\na = [1.0]\nb = [" + ones(34) + "]\n"},
    {"a recursion without its output", "kind = \"iir\"\nb = [1.0]\na = [0.0, 0.5]\n"},
    {"a recursion that passes nothing", "kind = \"iir\"\nb = [0.0, 0.0]\na = [1.0, 0.5]\n"},
    {"a recursion that is unstable", "kind = \"iir\"\nb = [1.0]\na = [1.0, -2.1, 1.1]\n"},
    {"a recursion with the signs of another book", "kind = \"iir\"\nb = [1.0]\na = [1.0, 1.5, -0.7]\n"},
    {"a recursion that is unstable, not normalised", "kind = \"iir\"\nb = [1.0]\na = [0.5, 0.5]\n"},
    {"a recursion whose a[0] is next to nothing", "kind = \"iir\"\nb = [1.0]\na = [1e-12, 1e-13]\n"},
    {"a recursion that rounds to an unstable one",
     "kind = \"iir\"\nb = [0.01]\na = [1.0, -1.9, 0.998]\ncoefficient_fraction_bits = 7\n"},
    {"a CIC with too large a gain", "kind = \"cic-decimator\"\norder = 8\nfactor = 256\n"},
    {"a CIC that changes no rate", "kind = \"cic-interpolator\"\norder = 3\nfactor = 1\n"},
    {"an interpolator whose taps are no multiple", "kind = \"fir-interpolator\"\ntaps = [0.5, 0.5, 0.5]\nfactor = 2\n"},
    {"an interpolator whose taps lack more than one", "kind = \"fir-interpolator\"\ntaps = [0.5, 0.5]\nfactor = 4\n"},
    {"a phase beyond its group", "kind = \"fir-decimator\"\ntaps = [1.0]\nfactor = 4\nphase_samples = 4\n"},
    {"a decimator with the words of a CIC", "kind = \"fir-decimator\"\norder = 4\nfactor = 4\n"},
    {"a filter that changes the rate", "kind = \"cic-decimator\"\norder = 4\nfactor = 25\n"},
    {"a median of too many points", "kind = \"median\"\npoints = 5000\n"},
    {"a start that is none", "kind = \"median\"\npoints = 5\ninitial = \"ones\"\n"},
    {"a median that grows", "kind = \"median\"\npoints = 5\ninitial = \"growing\"\n"},
    {"a CIC that begins with its first sample",
     "kind = \"cic-decimator\"\norder = 4\nfactor = 25\ninitial = \"first-sample\"\n"},
    {"taps that all round to 0, at any number of bits",
     "kind = \"fir\"\ntaps = [1e-30]\ncoefficient_fraction_bits = 15\n"},
    {"a channel where there is one", "kind = \"fir\"\ntaps = [1.0]\nchannels = [2]\n"},
    {"channels that are no list", "kind = \"fir\"\ntaps = [1.0]\nchannels = 1\n"},
    {"half a channel", "kind = \"fir\"\ntaps = [1.0]\nchannels = [1.5]\n"},
    {"an accumulator that is too narrow",
     "kind = \"fir\"\ntaps = [1.0]\n[filter.arithmetic]\naccumulator_bits = 16\nstage_format = \"i32\"\n"},
    {"floats that wrap",
     "kind = \"fir\"\ntaps = [1.0]\n[filter.arithmetic]\noutput_overflow = \"wrap\"\nstage_format = \"f32\"\n"},
    {"a word of the arithmetic that is none",
     "kind = \"fir\"\ntaps = [1.0]\n[filter.arithmetic]\nrounding = \"half\"\n"},
    {"an unknown filter beside another one", "kind = \"unknown\"\n[[filter]]\nkind = \"fir\"\ntaps = [1.0]\n"},
    {"an unknown filter with a rule that needs a reference", "kind = \"unknown\"\n"},
};

/// Of words that never went through a plan: the reader has refused these before.
void show_words(Page& page) {
    const auto made = [&](std::string_view done, const std::string& kind,
                          const std::vector<std::pair<std::string, ParameterValue>>& given) {
        ParameterValues values;
        for (const auto& [name, value] : given) values.set(name, value);
        page.show(done, make_stage(kind, values, {1200.0, {}, 1}));
    };
    using Reals = std::vector<double>;
    made("a kind that is none", "wavelet", {});
    made("no points", "moving-average", {});
    made("half a point", "moving-average", {{"points", 1.5}});
    made("too many points", "moving-average", {{"points", std::int64_t{70000}}});
    made("no tap", "fir", {{"taps", Reals{}}});
    made("a tap that is too large", "fir", {{"taps", Reals{1e40}}});
    made("no section", "biquad-cascade", {{"sections", std::vector<Reals>{}}});
    made("six numbers of a file of sections", "biquad-cascade", {{"sections_file", Reals(6, 0.1)}});
    made("half a bit", "fir", {{"taps", Reals{1.0}}, {"coefficient_fraction_bits", 1.5}});
    made("too many bits", "fir", {{"taps", Reals{1.0}}, {"coefficient_fraction_bits", std::int64_t{63}}});
    made("no channel", "fir", {{"taps", Reals{1.0}}, {"channels", Reals{}}});
    made("no output coefficients", "iir", {{"b", Reals{1.0}}});
    made("a start that is none", "fir", {{"taps", Reals{1.0}}, {"initial", std::string("ones")}});
    made("a stage of an unknown filter", "unknown", {});
    ParameterValues arithmetic;
    arithmetic.set("accumulator_bits", std::int64_t{65});
    page.show("too wide an accumulator", make_arithmetic(arithmetic, {}));
}

}  // namespace

void filter_chapter(Page& page) {
    page.chapter("The filter");
    FakeFiles files;
    files.contents["./taps.txt"] = "1\n";
    files.contents["./words.txt"] = "0.25\nhalf\n";
    files.contents["./empty.txt"] = "# none\n";
    files.contents["./nan.txt"] = "nan\n";
    files.contents["./large.txt"] = "1e40\n";
    files.contents["./binary.txt"] = std::string("0.25\n\xff\n");
    files.contents["./six.txt"] = "1\n0\n0\n1\n0.5\n0.5\n";
    for (const Body& body : bodies) {
        Parts parts;
        parts.filter = body.filter;
        show_plan(page, body.done, parts.text(), files);
    }
    Parts parts;
    parts.signal += "channels = 2\n";
    const auto with_channels = [&](std::string_view done, const std::string& list) {
        parts.filter = "kind = \"fir\"\ntaps = [1.0]\nchannels = " + list + "\n";
        show_plan(page, done, parts.text());
    };
    with_channels("a channel that is not there", "[3]");
    with_channels("a channel twice", "[1, 1]");
    with_channels("an empty list of channels", "[]");
    page.chapter("The filter, made without a plan");
    show_words(page);
}

}  // namespace halflsb::diagnostics
