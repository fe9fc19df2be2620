#include "runner/config/bands.hpp"

#include <algorithm>

#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

struct Band {
    double from_hz = 0.0, to_hz = 0.0, min_db = -no_limit, max_db = no_limit;
    Place place;
};

std::string edges(const Band& band) { return number_text(band.from_hz) + " to " + number_text(band.to_hz) + " Hz"; }

std::optional<Band> read_band(const TomlValue& table, ReadContext& context) {
    TableReader reader(context, table, "a band");
    const Recipe& recipe = band_recipe();
    const ParameterValues values = reader.parameters(recipe);
    reader.refuse_unknown_keys();
    if (!reader.is_clean()) return std::nullopt;
    const Band band{*values.number(recipe, "from_hz"), *values.number(recipe, "to_hz"),
                    values.number(recipe, "min_db").value_or(-no_limit),
                    values.number(recipe, "max_db").value_or(no_limit), table.place};
    if (!(band.from_hz <= band.to_hz)) {
        reader.refuse(reader.place_of("from_hz"), "the band " + edges(band) + " runs backwards",
                      "exchange from_hz and to_hz");
    }
    if (context.nyquist_hz && !(band.to_hz <= *context.nyquist_hz)) {
        const std::string nyquist = number_text(*context.nyquist_hz) + " Hz";
        reader.refuse(reader.place_of("to_hz"), "the band " + edges(band) + " ends above Nyquist, " + nyquist,
                      "end it at " + nyquist + " or below, or correct rate_hz");
    }
    if (!values.has("min_db") && !values.has("max_db")) {
        reader.refuse(table.place, "the band " + edges(band) + " has no limit", "give min_db, max_db or both");
    }
    if (!(band.min_db <= band.max_db)) {
        reader.refuse(
            reader.place_of("min_db"),
            "the limits cross: min_db = " + number_text(band.min_db) + " is above max_db = " + number_text(band.max_db),
            "exchange them");
    }
    if (!reader.is_clean()) return std::nullopt;
    return band;
}

/// No gain can satisfy two bands that share a frequency (edges belong to a band) and whose limits do not
/// meet.
void refuse_contradictions(const std::vector<Band>& bands, Problems& problems) {
    for (std::size_t i = 0; i < bands.size(); ++i) {
        for (std::size_t j = 0; j < i; ++j) {
            const double from_hz = std::max(bands[i].from_hz, bands[j].from_hz),
                         to_hz = std::min(bands[i].to_hz, bands[j].to_hz);
            const double min_db = std::max(bands[i].min_db, bands[j].min_db),
                         max_db = std::min(bands[i].max_db, bands[j].max_db);
            if (from_hz > to_hz || min_db <= max_db) continue;
            const std::string shared = from_hz == to_hz ? "at " + number_text(from_hz) + " Hz"
                                                        : "from " + edges({from_hz, to_hz, 0.0, 0.0, {}});
            problems.add(bands[i].place,
                         "this band and the one in " + problems.line_text(bands[j].place, bands[i].place) +
                             " contradict each other " + shared + ": at least " + number_text(min_db) +
                             " dB and at most " + number_text(max_db) + " dB",
                         "both edges belong to a band; move the bands apart, or correct a limit");
            return;
        }
    }
}

}  // namespace

const Recipe& band_recipe() {
    static const Recipe recipe{
        "band",
        "A range of frequencies, both edges included, with at least one limit.",
        {
            {.name = "from_hz",
             .type = ParameterType::real,
             .unit = "Hz",
             .minimum = 0.0,
             .required = true,
             .help = "Lower edge."},
            {.name = "to_hz",
             .type = ParameterType::real,
             .unit = "Hz",
             .minimum = 0.0,
             .required = true,
             .help = "Upper edge, not above Nyquist."},
            {.name = "min_db", .type = ParameterType::real, .unit = "dB", .help = "Least gain."},
            {.name = "max_db", .type = ParameterType::real, .unit = "dB", .help = "Largest gain."},
        }};
    return recipe;
}

std::optional<std::vector<std::vector<double>>> read_bands(const TomlValue& array, ReadContext& context) {
    if (array.items.empty()) {
        context.problems.add(array.place, "bands is empty", "give at least one { from_hz, to_hz, min_db or max_db }");
        return std::nullopt;
    }
    std::vector<Band> bands;
    for (const TomlValue& item : array.items) {
        if (item.kind != TomlValue::Kind::table) {
            context.problems.add(item.place, "in bands stands " + kind_text(item) + ", wanted tables",
                                 "write { from_hz = 0.0, to_hz = 50.0, min_db = -1.0, max_db = 1.0 }");
            continue;
        }
        if (auto band = read_band(item, context)) bands.push_back(*band);
    }
    if (bands.size() != array.items.size()) return std::nullopt;
    const std::size_t before = context.problems.count();
    refuse_contradictions(bands, context.problems);
    if (context.problems.count() != before) return std::nullopt;
    std::vector<std::vector<double>> rows;
    for (const Band& band : bands) rows.push_back({band.from_hz, band.to_hz, band.min_db, band.max_db});
    return rows;
}

}  // namespace halflsb
