#include "runner/record/recorded_run.hpp"

#include <limits>
#include <set>

#include "runner/record/run_document.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/record/strict_json.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t most_samples = std::int64_t{1} << 53;
constexpr std::int64_t most_cases = 1'000'000;

Error refused(const std::string& place, std::string problem, std::string remedy) {
    return {ErrorKind::input, place, std::move(problem), std::move(remedy)};
}

std::optional<Error> read_error(const JsonField& field) {
    if (field.is_null()) return std::nullopt;
    Error error;
    const JsonField kind = field.at("kind");
    const std::string name = kind.text();
    if (const auto known = error_kind_of(name)) {
        error.kind = *known;
    } else if (!name.empty()) {
        kind.refuse("is '" + printable(name) + "', which is no kind of error");
    }
    error.place = field.at("place").text_or_empty();
    error.problem = field.at("problem").text();
    error.remedy = field.at("remedy").text_or_empty();
    return error;
}

/// A name that a record may give a file of its folder.
std::string read_file_name(const JsonField& field) {
    const std::string name = field.text();
    bool inside = !name.empty() && name.front() != '/' && name.find('\0') == std::string::npos;
    for (std::size_t from = 0; inside && from <= name.size();) {
        const std::size_t slash = std::min(name.find('/', from), name.size());
        if (name.compare(from, slash - from, "..") == 0) inside = false;
        from = slash + 1;
    }
    if (!inside) field.refuse("is '" + printable(name) + "', which is no file of this folder");
    return name;
}

void read_capture(const JsonField& field, std::string& file, std::string& sha256) {
    if (field.is_null()) return;
    file = read_file_name(field.at("file"));
    sha256 = field.at("sha256").sha256_or_empty();
    if (sha256.empty()) field.at("sha256").refuse("is null: nothing shows that the capture is the one that was made");
}

template <class T, std::size_t count>
T read_choice(const JsonField& field, const T (&choices)[count]) {
    const std::string name = field.text();
    for (const T choice : choices) {
        if (name == name_of(choice)) return choice;
    }
    field.refuse("is '" + printable(name) + "', which has no meaning there");
    return choices[0];
}

std::optional<Companion> read_companion(const JsonField& field) {
    if (field.is_null()) return std::nullopt;
    constexpr std::int64_t most = std::numeric_limits<std::int32_t>::max();
    Companion companion;
    companion.base = field.at("base").text();
    field.at("terms").each([&](const JsonField& term) {
        companion.terms.push_back({term.at("gain").whole(-most, most), term.at("delay_samples").whole(0, most)});
    });
    const JsonField block = field.at("block_samples");
    if (!block.is_null()) companion.block_samples = block.whole(1, most);
    return companion;
}

/// Records of before have none.
std::optional<Spread> read_spread(const JsonField& stream, const char* key) {
    const JsonField field = stream.at_or_null(key);
    if (field.is_null()) return std::nullopt;
    return Spread{field.at("median").number(), field.at("percentile_99").number(), field.at("largest").number()};
}

CaseResult read_case(const JsonField& field) {
    CaseResult result;
    result.number = static_cast<std::size_t>(field.at("number").whole(1, most_cases));
    result.name = field.at("name").text();
    const JsonField stimulus = field.at("stimulus");
    result.stimulus.shape = stimulus.at("shape").text_or_empty();
    result.stimulus.samples = stimulus.at("samples").whole(0, most_samples);
    result.stimulus.sha256 = stimulus.at("sha256").sha256_or_empty();
    if (!stimulus.at("file").is_null()) result.stimulus.file = read_file_name(stimulus.at("file"));
    result.rate_hz = field.at("rate_hz").number_or_none();
    result.start = read_choice(field.at("start"), {Start::reset, Start::flush, Start::running});
    result.start_samples = field.at("start_samples").whole(0, most_samples);
    // Runs that were recorded before there were companions have none.
    result.companion = read_companion(field.at_or_null("companion"));
    field.at("settings").each_member([&](const std::string& name, const JsonField& value) {
        using Limits = std::numeric_limits<std::int32_t>;
        result.settings.push_back({name, static_cast<std::int32_t>(value.whole(Limits::min(), Limits::max())), {}});
    });
    const JsonField stream = field.at("stream");
    result.stream.samples_sent = stream.at("sent_samples").whole(0, most_samples);
    result.stream.samples_received = stream.at("received_samples").whole(0, most_samples);
    result.stream.frames_bad_at_host = stream.at("bad_frames_at_host").whole(0, most_samples);
    result.stream.ticks_per_sample = read_spread(stream, "ticks_per_sample");
    result.stream.round_trip_s = read_spread(stream, "round_trip_s");
    result.stream.resends = stream.at("resends").whole(0, most_samples);
    const auto counter = [&](const char* key) -> std::optional<std::uint32_t> {
        const JsonField count = stream.at(key);
        if (count.is_null()) return std::nullopt;
        return static_cast<std::uint32_t>(count.whole(0, std::numeric_limits<std::uint32_t>::max()));
    };
    result.stream.frames_bad_at_board = counter("bad_frames_at_board");
    result.stream.bytes_lost_at_board = counter("lost_at_board_bytes");
    result.stream.gaps_at_board = counter("gaps_at_board");
    result.started_utc = field.at("started_utc").text_or_empty();
    result.elapsed_s = field.at("elapsed_s").number_or_none().value_or(0.0);
    read_capture(field.at("capture"), result.capture_file, result.capture_sha256);
    if (!field.at_or_null("ticks").is_null()) read_capture(field.at("ticks"), result.ticks_file, result.ticks_sha256);
    field.at("attempts").each([&](const JsonField& attempt) {
        AttemptResult made;
        if (auto invalid = read_error(attempt.at("invalid"))) made.invalid = *invalid;
        made.started_utc = attempt.at("started_utc").text_or_empty();
        made.elapsed_s = attempt.at("elapsed_s").number_or_none().value_or(0.0);
        read_capture(attempt.at("capture"), made.capture_file, made.capture_sha256);
        result.attempts.push_back(std::move(made));
    });
    result.rerun = field.at("rerun").text_or_empty();
    return result;
}

/// What of the verdict is a fact of the capture: whether it was whole.
void read_verdict(const JsonField& field, CaseResult& result) {
    if (field.at("name").text() != result.name)
        field.at("name").refuse("is not the name of the case that stands there");
    result.verdict = read_choice(field.at("verdict"),
                                 {CaseVerdict::pass, CaseVerdict::undecided, CaseVerdict::invalid, CaseVerdict::fail});
    result.grade = read_choice(field.at("grade"), {Grade::proven, Grade::plausible, Grade::broken});
    result.invalid = read_error(field.at("invalid"));
    const bool invalid = result.verdict == CaseVerdict::invalid;
    if (invalid != (result.grade == Grade::broken) || invalid != result.invalid.has_value())
        field.refuse("contradicts itself: verdict, grade and invalid do not belong together");
    if (!invalid && result.capture_file.empty()) field.refuse("was judged, and the record names no capture of it");
    if (!invalid && result.stimulus.sha256.empty())
        field.refuse("was judged, and the record does not say what was sent");
}

void read_board(const JsonField& field, BoardFacts& board) {
    constexpr std::int64_t most = std::numeric_limits<int>::max();
    board.rig_name = field.at("rig_name").text_or_empty();
    board.link = field.at("link").text_or_empty();
    board.serial = field.at("serial").text_or_empty();
    board.build_id = field.at("build_id").text_or_empty();
    board.filter = field.at("filter").text_or_empty();
    board.injection = field.at("injection").text_or_empty();
    board.channels = static_cast<int>(field.at("channels").whole(0, most));
    board.block_samples = static_cast<int>(field.at("block_samples").whole(0, most));
    board.credit_blocks = static_cast<int>(field.at("credit_blocks").whole(0, most));
    board.tick_hz = static_cast<std::uint32_t>(field.at("tick_hz").whole(0, std::numeric_limits<std::uint32_t>::max()));
    if (!field.at_or_null("tick_bits").is_null()) board.tick_bits = static_cast<int>(field.at("tick_bits").whole(0, 255));
}

/// "u12, left-justified" without the layout.
std::string format_name(const JsonField& field) {
    const std::string text = field.text();
    return text.substr(0, text.find(','));
}

void read_document(const JsonField& top, RecordedRun& record) {
    RunResult& run = record.run;
    run.tool_version = top.at("tool_version").text();
    run.started_utc = top.at("started_utc").text_or_empty();
    run.elapsed_s = top.at("elapsed_s").number_or_none().value_or(0.0);
    run.plan_file = top.at("plan").at("file").text();
    run.plan_sha256 = top.at("plan").at("sha256").sha256_or_empty();
    run.root = top.at("plan").at("root").text_or_empty();
    top.at("plan").at("files").each([&](const JsonField& file) {
        record.plan_files.emplace_back(read_file_name(file.at("path")), file.at("sha256").sha256_or_empty());
    });
    run.rig_file = top.at("rig").at("file").text();
    run.rig_sha256 = top.at("rig").at("sha256").sha256_or_empty();
    if (!top.at("seed").is_null()) run.seed = top.at("seed").whole_unsigned();
    read_board(top.at("board"), run.board);
    const JsonField firmware = top.at("firmware");
    run.firmware.state =
        firmware.at("verified").flag() ? FirmwareCheck::State::agrees : FirmwareCheck::State::not_verified;
    run.firmware.image_file = firmware.at("image_file").text_or_empty();
    run.firmware.image_build_id = firmware.at("image_build_id").text_or_empty();
    run.firmware.before_run_skipped = firmware.at("before_run_skipped").flag();
    run.ended_by = read_error(top.at("ended_by"));
    top.at("warnings").each([&](const JsonField& text) { run.warnings.push_back(text.text()); });
    top.at("cases_planned").each([&](const JsonField& name) { run.cases_planned.push_back(name.text()); });
    top.at("cases").each([&](const JsonField& field) { run.cases.push_back(read_case(field)); });

    const JsonField verdict = top.at("verdict"), signal = verdict.at("signal");
    run.title = verdict.at("title").text_or_empty();
    record.signal.rate_hz = signal.at("rate_hz").number();
    record.signal.input = format_name(signal.at("input"));
    record.signal.output = format_name(signal.at("output"));
    record.signal.channels = static_cast<int>(signal.at("channels").whole(1, 1000));
    std::size_t judged = 0;
    verdict.at("cases").each([&](const JsonField& field) {
        if (judged < run.cases.size()) read_verdict(field, run.cases[judged]);
        ++judged;
    });
    if (judged != run.cases.size()) {
        verdict.at("cases").refuse("has " + std::to_string(judged) + " of the " + std::to_string(run.cases.size()) +
                                   " cases that ran");
    }
    std::set<std::string> names;
    for (const CaseResult& result : run.cases) {
        if (!names.insert(result.name).second)
            top.at("cases").refuse("has the case '" + printable(result.name) + "' twice");
    }
    names.clear();
    for (const std::string& name : run.cases_planned) {
        if (!names.insert(name).second) top.at("cases_planned").refuse("has the case '" + printable(name) + "' twice");
    }
    if (names.empty()) top.at("cases_planned").refuse("is empty: no run is without a case");
    if (run.cases.size() > run.cases_planned.size()) top.at("cases").refuse("has more cases than were planned");
}

}  // namespace

std::string RecordedRun::plan_root() const { return path_of(plan_files_folder); }

Outcome<RecordedRun> read_recorded_run(const Files& files, const std::string& given) {
    RecordedRun record;
    record.folder = given;
    while (record.folder.size() > 1 && record.folder.back() == '/') record.folder.pop_back();
    const std::string place = record.path_of("run.json");
    if (!files.exists(record.folder)) {
        return refused(given, "there is no such folder",
                       "give the folder of a run: its name is in the last lines of halflsb check");
    }
    if (!files.exists(place)) {
        return refused(given, "it is not the folder of a run: it holds no run.json",
                       "give the folder of a run: its name is in the last lines of halflsb check");
    }
    auto text = files.read(place, largest_run_json_bytes);
    if (!text) return text.error();
    const auto json = parse_json_strictly(*text, place);
    if (!json) return json.error();

    std::string problem;
    const JsonField top(*json, problem);
    const std::string format = top.at("format").text();
    const std::int64_t version =
        problem.empty() ? top.at("format_version").whole(0, std::numeric_limits<std::int32_t>::max()) : 0;
    if (!problem.empty() || format != "halflsb run") {
        return refused(place,
                       "it is not the record of a run: " +
                           (problem.empty() ? "its format is '" + printable(format) + "'" : problem),
                       "a record begins with \"format\": \"halflsb run\"");
    }
    const std::string writer = json->contains("tool_version") && (*json)["tool_version"].is_string()
                                   ? "halflsb " + printable((*json)["tool_version"].get<std::string>())
                                   : "a version of halflsb that it does not name";
    if (version > run_json_version) {
        return refused(place,
                       "it is of format version " + std::to_string(version) + ", written by " + writer +
                           "; this halflsb reads version " + std::to_string(run_json_version),
                       "judge it with that version or a newer one");
    }
    if (version < run_json_version) {
        return refused(place,
                       "it is of format version " + std::to_string(version) + ", written by " + writer +
                           ": it does not say what was sent, so it cannot be judged again",
                       "capture anew with halflsb check");
    }
    const bool finished = top.at("finished").flag();
    if (problem.empty() && !finished) {
        return refused(place, "the run is incomplete: it was never finished, so its program died or is still at work",
                       "wait for it, or capture anew with halflsb check");
    }
    read_document(top, record);
    if (!problem.empty()) return refused(place, problem, "it was edited or damaged; capture anew with halflsb check");
    if (!is_sealed(*text)) {
        return refused(place, "it was edited: its bytes have another SHA-256 than its content_sha256 says",
                       "take the record as check wrote it, or capture anew with halflsb check");
    }
    record.document = std::move(*text);
    return record;
}

}  // namespace halflsb
