// What a filter that is designed from a specification can be refused for.
#include <string>
#include <vector>

#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct Body {
    std::string_view done, kind, words;
};

// At 1200 samples a second.
const std::vector<Body> bodies = {
    {"no response", "butterworth", "order = 4\ncorner_hz = 10.0\n"},
    {"a response that is none", "butterworth", "response = \"band\"\norder = 4\ncorner_hz = 10.0\n"},
    {"no corner", "butterworth", "response = \"low-pass\"\norder = 4\n"},
    {"one corner of a band", "butterworth", "response = \"band-pass\"\norder = 4\nfrom_hz = 10.0\n"},
    {"a corner of a band", "butterworth", "response = \"band-pass\"\norder = 4\ncorner_hz = 10.0\n"},
    {"the end of a band that is none", "butterworth",
     "response = \"high-pass\"\norder = 4\ncorner_hz = 9.0\nto_hz = 20.0\n"},
    {"a band turned round", "butterworth", "response = \"band-stop\"\norder = 4\nfrom_hz = 200.0\nto_hz = 100.0\n"},
    {"a band that ends above Nyquist", "butterworth",
     "response = \"band-stop\"\norder = 4\nfrom_hz = 200.0\nto_hz = 700.0\n"},
    {"too high an order", "butterworth", "response = \"low-pass\"\norder = 13\ncorner_hz = 10.0\n"},
    {"too low a corner", "butterworth", "response = \"low-pass\"\norder = 4\ncorner_hz = 0.001\n"},
    {"too high a corner", "butterworth", "response = \"high-pass\"\norder = 4\ncorner_hz = 599.999\n"},
    {"too narrow a band", "butterworth", "response = \"band-pass\"\norder = 4\nfrom_hz = 0.1\nto_hz = 0.101\n"},
    {"too narrow a band near Nyquist", "butterworth",
     "response = \"band-pass\"\norder = 2\nfrom_hz = 599.9998\nto_hz = 599.99981\n"},
    {"too wide a band", "butterworth", "response = \"band-pass\"\norder = 2\nfrom_hz = 1e-7\nto_hz = 400.0\n"},
    {"too high an order for a band", "butterworth",
     "response = \"band-pass\"\norder = 12\nfrom_hz = 0.01\nto_hz = 599.999\n"},
    {"too low a band", "butterworth", "response = \"band-pass\"\norder = 2\nfrom_hz = 2e-5\nto_hz = 1e-4\n"},
    {"a band from end to end", "butterworth",
     "response = \"band-pass\"\norder = 12\nfrom_hz = 1e-8\nto_hz = 599.9999999\n"},
    {"no ripple", "chebyshev", "response = \"low-pass\"\norder = 4\ncorner_hz = 10.0\n"},
    {"an even number of taps", "windowed-sinc", "response = \"high-pass\"\ntaps = 64\ncorner_hz = 100.0\n"},
    {"two taps of a window that ends at 0", "windowed-sinc",
     "response = \"low-pass\"\ntaps = 2\ncorner_hz = 100.0\nwindow = \"hann\"\n"},
    {"too few taps", "windowed-sinc",
     "response = \"band-stop\"\ntaps = 29\nfrom_hz = 1.2\nto_hz = 121.2\nwindow = \"rectangular\"\n"},
    {"never enough taps", "windowed-sinc",
     "response = \"band-stop\"\ntaps = 9\nfrom_hz = 0.001\nto_hz = 121.2\nwindow = \"rectangular\"\n"},
    {"a kaiser window without its number", "windowed-sinc",
     "response = \"low-pass\"\ntaps = 63\ncorner_hz = 100.0\nwindow = \"kaiser\"\n"},
    {"the number of a kaiser window without it", "windowed-sinc",
     "response = \"low-pass\"\ntaps = 63\ncorner_hz = 100.0\nkaiser_beta = 6.0\n"},
    {"taps that all round to 0", "windowed-sinc",
     "response = \"low-pass\"\ntaps = 63\ncorner_hz = 10.0\ncoefficient_fraction_bits = 2\n"},
    {"no width", "audio-eq", "type = \"peaking\"\nfrequency_hz = 100.0\ngain_db = 3.0\n"},
    {"two widths", "audio-eq", "type = \"peaking\"\nfrequency_hz = 100.0\nq = 1.0\nshelf_slope = 1.0\ngain_db = 3.0\n"},
    {"no gain", "audio-eq", "type = \"peaking\"\nfrequency_hz = 100.0\nq = 1.0\n"},
    {"a gain of a low-pass", "audio-eq", "type = \"low-pass\"\nfrequency_hz = 100.0\nq = 1.0\ngain_db = 3.0\n"},
    {"a bandwidth of a low-pass", "audio-eq", "type = \"low-pass\"\nfrequency_hz = 100.0\nbandwidth_octaves = 1.0\n"},
    {"a slope without a shelf", "audio-eq",
     "type = \"peaking\"\nfrequency_hz = 100.0\nshelf_slope = 1.0\ngain_db = 3.0\n"},
    {"too steep a shelf", "audio-eq",
     "type = \"low-shelf\"\nfrequency_hz = 100.0\nshelf_slope = 2.5\ngain_db = 20.0\n"},
    {"too low a section", "audio-eq", "type = \"low-pass\"\nfrequency_hz = 0.001\nq = 1.0\n"},
    {"too high a section", "audio-eq", "type = \"low-pass\"\nfrequency_hz = 599.9999\nq = 1e4\n"},
    {"a weighting that is none", "weighting", "curve = \"B\"\n"},
    {"too low a rate for a weighting", "weighting", "curve = \"A\"\n"},
    {"between two bands", "octave-band", "fraction = 3\nmidband_hz = 110.0\norder = 4\n"},
    {"between two octaves", "octave-band", "fraction = 1\nmidband_hz = 90.0\norder = 4\n"},
    {"a band above Nyquist", "octave-band", "fraction = 1\nmidband_hz = 500.0\norder = 4\n"},
    {"too low a band of an octave", "octave-band", "fraction = 3\nmidband_hz = 0.01\norder = 4\n"},
    {"too small a fraction", "octave-band", "fraction = 25\nmidband_hz = 100.0\norder = 4\n"},
};

}  // namespace

void design_chapter(Page& page) {
    page.chapter("The filter, designed");
    Parts parts;
    for (const Body& body : bodies) {
        parts.filter = "kind = \"" + std::string(body.kind) + "\"\n" + std::string(body.words);
        show_plan(page, body.done, parts.text());
    }
    parts.signal = "rate_hz = 1e7\ninput = \"q15\"\noutput = \"q15\"\n";
    parts.filter = "kind = \"weighting\"\ncurve = \"A\"\n";
    show_plan(page, "too high a rate for a weighting", parts.text());
}

}  // namespace halflsb::diagnostics
