// What a filter that changes the sample rate asks of a plan and of a board.
#include <string>
#include <vector>

#include "runner/board.hpp"
#include "tests/diagnostics/plan_page.hpp"
#include "tests/runner/wire/bench.hpp"

namespace halflsb::diagnostics {
namespace {

using namespace halflsb::test;

const std::string fir_by_4 = "kind = \"fir-decimator\"\ntaps = [0.25, 0.5, 0.25]\nfactor = 4\n";
const std::string by_300 = "kind = \"fir-decimator\"\ntaps = [1.0]\nfactor = 300\n";
const std::string times_3 = "kind = \"fir-interpolator\"\ntaps = [0.5, 1.0, 0.5]\nfactor = 3\n";
const std::string response = "kind = \"response\"\nbands = [{ from_hz = 10, to_hz = 90, min_db = -9, max_db = 9 }]\n";

void show_plans(Page& page) {
    Parts parts;
    parts.filter = fir_by_4;
    parts.stimulus = "shape = \"noise\"\nlength_samples = 4097\n";
    show_plan(page, "a decimator with a length that is no multiple", parts.text());
    parts = Parts{};
    parts.filter = fir_by_4;
    parts.of_case = "start = \"running\"\ndiscard_samples = 30\n";
    show_plan(page, "a decimator with a discard that is no multiple", parts.text());
    parts = Parts{};
    parts.filter = by_300 + "[[filter]]\n" + by_300;
    show_plan(page, "decimators whose cycle is too long", parts.text());
    parts = Parts{};
    parts.signal += "channels = 2\n";
    parts.filter = fir_by_4 + "channels = [2]\n";
    show_plan(page, "a decimator of one channel", parts.text());
    parts = Parts{};
    parts.filter = fir_by_4;
    parts.rule = response;
    show_plan(page, "a response of a decimator from noise", parts.text());
    parts.stimulus = "shape = \"sine\"\nlength_samples = 4096\nfrequency_hz = 50\nrealisations = 10\n";
    show_plan(page, "a response of a decimator from realisations that are no multiple", parts.text());
    parts = Parts{};
    parts.rule = response;
    parts.filter = times_3 + "[[filter]]\n" + fir_by_4;
    show_plan(page, "a response where the rate goes up and down", parts.text());
}

void show_boards(Page& page) {
    Greeting greeting;
    BoardFilter filter;
    filter.name = "decimator";
    filter.input = filter.output = *sample_format("q15");
    filter.down = 8;
    greeting.filters = {filter};
    Signal signal;
    signal.input = signal.output = filter.input;
    page.show("a board of another rate", agreeing_filter(greeting, signal, "/dev/ttyUSB0", RateCycle{4, 1}));

    Bench another;
    another.board.filters[0].down = 4;
    another.board.filters[0].phase = 3;
    another.limits.block_samples = 6;
    if (!another.open(0, [](std::int64_t sent) { return (sent + 3) / 4; })) page.missing("a decimator");
    const Streamed streamed = stream(another.session(), 100, another.clock);
    page.show("a board that returns with another input of the group",
              streamed.error ? to_text(*streamed.error) : std::string());

    Bench nothing;
    nothing.board.filters[0].up = 0;
    page.show("a board that returns nothing", nothing.session().greet());
}

}  // namespace

void rate_chapter(Page& page) {
    page.chapter("Filters that change the sample rate");
    show_plans(page);
    show_boards(page);
}

}  // namespace halflsb::diagnostics
