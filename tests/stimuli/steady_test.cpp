// From where on a stimulus is nothing but its tones and a constant.
#include <catch2/catch.hpp>
#include <memory>

#include "stimuli/stimulus.hpp"

using namespace halflsb;

namespace {

ParameterValues words(std::vector<std::pair<std::string, ParameterValue>> list) {
    ParameterValues made;
    for (auto& [name, value] : list) made.set(name, std::move(value));
    return made;
}

std::optional<std::int64_t> steady_from(const std::string& shape, ParameterValues values,
                                        std::vector<StimulusWords> added = {}) {
    if (!values.has("length_samples")) values.set("length_samples", std::int64_t{1000});
    if (!added.empty()) values.set("add", std::make_shared<const std::vector<StimulusWords>>(std::move(added)));
    const auto made = make_stimulus(shape, values, {1200.0, *sample_format("q15")});
    REQUIRE(made);
    return (*made)->spectrum().steady_from_sample;
}

const std::pair<std::string, ParameterValue> at_30{"at_samples", std::int64_t{30}};

}  // namespace

TEST_CASE("steady: a shape alone", "[stimuli]") {
    CHECK(steady_from("sine", words({{"frequency_hz", 50.0}, at_30})) == 30);
    CHECK(steady_from("multitone", words({{"frequencies_hz", std::vector<double>{50.0, 60.0}}, at_30})) == 30);
    CHECK(steady_from("step", words({at_30})) == 30);
    CHECK(steady_from("impulse", words({at_30})) == 31);
    CHECK(steady_from("silence", {}) == 0);
    for (const auto& [shape, values] : std::vector<std::pair<std::string, ParameterValues>>{
             {"noise", {}},
             {"sine", words({{"frequency_hz", 50.0}, {"realisations", std::int64_t{4}}})},
             {"chirp", words({{"from_hz", 10.0}, {"to_hz", 100.0}})},
             {"square", words({{"period_samples", std::int64_t{10}}})}}) {
        INFO(shape);
        CHECK_FALSE(steady_from(shape, values));
    }
}

TEST_CASE("steady: a sum is so once all of it is, or has ended", "[stimuli]") {
    const ParameterValues sine = words({{"frequency_hz", 50.0}});
    CHECK(steady_from("sine", sine, {{"step", words({at_30})}}) == 30);
    CHECK(steady_from("sine", sine, {{"impulse", words({at_30})}, {"step", {}}}) == 31);
    CHECK(steady_from("sine", sine, {{"noise", words({{"length_samples", std::int64_t{200}}})}}) == 200);
    CHECK_FALSE(steady_from("sine", sine, {{"noise", {}}}));
    CHECK(steady_from("sine", sine, {{"sine", words({{"frequency_hz", 60.0}, at_30})}}) == 30);
    // Two of one frequency are left out of the tones, as they may cancel: there is one that nobody tells.
    CHECK_FALSE(steady_from("sine", sine, {{"sine", words({{"frequency_hz", 50.0}})}}));
}
