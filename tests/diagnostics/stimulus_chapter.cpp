// What a stimulus can be refused for.
#include <cmath>
#include <memory>
#include <string>
#include <vector>

#include "stimuli/stimulus.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct Body {
    std::string_view done, stimulus;
};

const std::vector<Body> bodies = {
    {"no length", "shape = \"step\"\n"},
    {"a start behind the end", "shape = \"step\"\nlength_samples = 100\nat_samples = 100\n"},
    {"a level given twice", "shape = \"step\"\nlength_samples = 100\nlevel_ratio = 0.5\nlevel_codes = 3\n"},
    {"a code beyond the format", "shape = \"step\"\nlength_samples = 100\nlevel_codes = 40000\n"},
    {"a level in a unit that is nowhere explained", "shape = \"step\"\nlength_samples = 100\nlevel_unit = 30.0\n"},
    {"a frequency above Nyquist", "shape = \"sine\"\nlength_samples = 100\nfrequency_hz = 601.0\n"},
    {"a frequency of 0", "shape = \"sine\"\nlength_samples = 100\nfrequency_hz = 0.0\n"},
    {"a sine that is zero in every sample", "shape = \"sine\"\nlength_samples = 100\nfrequency_hz = 600.0\n"},
    {"a tone twice", "shape = \"multitone\"\nlength_samples = 4096\nfrequencies_hz = [50.0, 100.0, 50.0]\n"},
    {"no tone", "shape = \"multitone\"\nlength_samples = 4096\nfrequencies_hz = []\n"},
    {"realisations that are too short",
     "shape = \"sine\"\nlength_samples = 1000\nfrequency_hz = 50.0\nrealisations = 16\n"},
    {"realisations of a stimulus that is too short for two",
     "shape = \"sine\"\nlength_samples = 100\nfrequency_hz = 50.0\nrealisations = 2\n"},
    {"a chirp that stands still", "shape = \"chirp\"\nlength_samples = 100\nfrom_hz = 50.0\nto_hz = 50.0\n"},
    {"a ramp that stays level", "shape = \"ramp\"\nlength_samples = 100\nfrom_ratio = 0.5\nto_ratio = 0.5\n"},
    {"a ramp of one sample", "shape = \"ramp\"\nlength_samples = 1\nfrom_ratio = 0.0\nto_ratio = 0.5\n"},
    {"a ramp without a beginning", "shape = \"ramp\"\nlength_samples = 100\nto_ratio = 0.5\n"},
    {"a square wave with two periods",
     "shape = \"square\"\nlength_samples = 100\nfrequency_hz = 50.0\nperiod_samples = 24\n"},
    {"a square wave without a period", "shape = \"square\"\nlength_samples = 100\n"},
    {"a square wave that never ends", "shape = \"square\"\nlength_samples = 100\nfrequency_hz = 1e-9\n"},
    {"a square wave with a level that lasts no sample",
     "shape = \"square\"\nlength_samples = 100\nperiod_samples = 4\nduty = 0.1\n"},
    {"signs that are none", "shape = \"signs\"\nlength_samples = 100\nsigns = \"+-x\"\n"},
    {"no signs", "shape = \"signs\"\nlength_samples = 100\nsigns = \"\"\n"},
    {"more signs than samples", "shape = \"signs\"\nlength_samples = 4\nat_samples = 2\nsigns = \"+-+\"\n"},
    {"an order that the recommendation does not have", "shape = \"prbs\"\nlength_samples = 100\norder = 10\n"},
    {"a register that is too long for its order",
     "shape = \"prbs\"\nlength_samples = 100\norder = 9\nregister_seed = 512\n"},
    {"one burst that is too long",
     "shape = \"burst\"\nlength_samples = 10\nfrequency_hz = 50.0\non_samples = 20\noff_samples = 5\n"},
    {"bursts that are too many",
     "shape = \"burst\"\nlength_samples = 50\nfrequency_hz = 50.0\non_samples = 20\noff_samples = 5\nrepeats = 3\n"},
    {"a negative seed", "shape = \"noise\"\nlength_samples = 100\nseed = -1\n"},
    {"a sequence without parts", "shape = \"sequence\"\nparts = []\n"},
    {"a sequence of a part that is no stimulus", "shape = \"sequence\"\nparts = [\"step\"]\n"},
    {"a sequence that is one stimulus", "shape = \"sequence\"\nparts = \"step\"\n"},
    {"a part without a length", "shape = \"sequence\"\nparts = [{ shape = \"step\" }]\n"},
    {"a part with a frequency above Nyquist",
     "shape = \"sequence\"\nparts = [{ shape = \"silence\", length_samples = 9 },\n"
     "         { shape = \"sine\", length_samples = 9, frequency_hz = 700.0 }]\n"},
    {"a sequence repeated beyond the longest stimulus",
     "shape = \"sequence\"\nrepeat = 10000000000\nparts = [{ shape = \"step\", length_samples = 2 }]\n"},
    {"an added stimulus that is longer",
     "shape = \"step\"\nlength_samples = 100\nadd = [{ shape = \"noise\", length_samples = 101 }]\n"},
    {"stimuli nested too deep",
     "shape = \"sequence\"\nparts = [{ shape = \"sequence\", parts = [{ shape = \"sequence\", parts = ["
     "{ shape = \"sequence\", parts = [{ shape = \"sequence\", parts = ["
     "{ shape = \"step\", length_samples = 9 }] }] }] }] }]\n"},
    {"a channel that the signal does not have", "channel = 2\nshape = \"step\"\nlength_samples = 100\n"},
};

/// Of words that never went through a plan: the reader has refused most of these before.
void show_words(Page& page) {
    const StimulusContext context{1200.0, *sample_format("q15")};
    const auto made = [&](std::string_view done, const std::string& shape,
                          const std::vector<std::pair<std::string, ParameterValue>>& given) {
        ParameterValues values;
        for (const auto& [name, value] : given) values.set(name, value);
        page.show(done, make_stimulus(shape, values, context));
    };
    using Reals = std::vector<double>;
    const auto stimuli = [](std::vector<StimulusWords> list) {
        return ParameterValue(std::make_shared<const std::vector<StimulusWords>>(std::move(list)));
    };
    const std::int64_t length = 100;
    page.show("a rate of 0", make_stimulus("step", {}, {0.0, *sample_format("q15")}));
    made("a shape that is none", "sinus", {});
    made("a word that the shape does not have", "silence", {{"length_samples", length}, {"level_ratio", 0.5}});
    made("a string for a whole number", "step", {{"length_samples", std::string("long")}});
    made("a string for a number", "step", {{"length_samples", length}, {"level_ratio", std::string("half")}});
    made("a number for a list of numbers", "multitone", {{"length_samples", length}, {"frequencies_hz", 5.0}});
    made("a number for a file", "file", {{"file", 5.0}});
    made("a number for a list of stimuli", "sequence", {{"parts", 5.0}});
    made("a word that is no choice", "noise", {{"length_samples", length}, {"distribution", std::string("pink")}});
    made("nothing for what is needed", "step", {});
    made("a level that is not finite", "step", {{"length_samples", length}, {"level_ratio", std::nan("")}});
    made("a level below its range", "step", {{"length_samples", length}, {"level_ratio", -1.5}});
    made("a level above its range", "step", {{"length_samples", length}, {"level_ratio", 1.5}});
    made("a frequency not above its range", "sine", {{"length_samples", length}, {"frequency_hz", 0.0}});
    made("no number in a list", "multitone", {{"length_samples", length}, {"frequencies_hz", Reals{}}});
    made("too many tones", "multitone", {{"length_samples", length}, {"frequencies_hz", Reals(1001, 50.0)}});
    made("no stimulus in a list", "sequence", {{"parts", stimuli({})}});
    StimulusWords step{"step", {}};
    step.values.set("length_samples", length);
    made("a nested shape that is none", "sequence", {{"parts", stimuli({{"sinus", {}}})}});
    made("more stimuli than there may be", "sequence", {{"parts", stimuli(std::vector(1001, step))}});
    StimulusWords nest = step;
    for (int depth = 0; depth < 4; ++depth) {
        StimulusWords outer{"sequence", {}};
        outer.values.set("parts", stimuli({nest}));
        nest = outer;
    }
    made("stimuli nested too deep", "sequence", {{"parts", stimuli({nest})}});
    made("a part without a length", "sequence", {{"parts", stimuli({{"step", {}}})}});
}

}  // namespace

void stimulus_chapter(Page& page) {
    page.chapter("The stimuli");
    for (const Body& body : bodies) {
        Parts parts;
        parts.stimulus = body.stimulus;
        show_plan(page, body.done, parts.text());
    }
    const auto with = [&](std::string_view done, const std::string& signal, const std::string& stimulus) {
        Parts parts;
        parts.signal = "rate_hz = 1200.0\n" + signal;
        parts.rule = "kind = \"error\"\nmax_ratio = 0.5\n";
        parts.stimulus = stimulus;
        show_plan(page, done, parts.text());
    };
    with("codes of a float format", "input = \"f32\"\noutput = \"f32\"\n",
         "shape = \"step\"\nlength_samples = 100\nlevel_codes = 3\n");
    with("a distance from the mid-code that is too long", "input = \"u12\"\noutput = \"u12\"\n",
         "shape = \"step\"\nlength_samples = 100\nlevel_codes = 2048\n");
    with("a level beyond full scale in the unit",
         "input = \"q15\"\noutput = \"q15\"\nunit = \"g\"\nfull_scale_unit = 6000.0\n",
         "shape = \"step\"\nlength_samples = 100\nlevel_unit = 7000.0\n");
    with("a channel beyond those of the signal", "input = \"q15\"\noutput = \"q15\"\nchannels = 2\n",
         "channel = 3\nshape = \"step\"\nlength_samples = 100\n");
    std::string nested = "shape = \"sequence\"\nparts = [";
    for (int part = 0; part < 1001; ++part) nested += "\n    { shape = \"step\", length_samples = 9 },";
    with("more stimuli than there may be", "input = \"q15\"\noutput = \"q15\"\n", nested + "\n]\n");
    page.chapter("The stimuli, made without a plan");
    show_words(page);
}

}  // namespace halflsb::diagnostics
