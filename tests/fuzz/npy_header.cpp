// A header that parses stays inside the file and says what a header of ours for the same array says.
#include <limits>
#include <string>

#include "stimuli/npy.hpp"
#include "tests/fuzz/target.hpp"

using namespace halflsb;

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    const Outcome<NpyHeader> parsed = parse_npy_header(fuzz::bytes_of(data, size));
    if (!parsed) {
        const Error& error = parsed.error();
        fuzz::require(error.kind == ErrorKind::input && error.place.starts_with("byte ") && !error.problem.empty(),
                      "a refusal says where and what", to_text(error));
        return 0;
    }
    fuzz::require(parsed->count >= 0 && parsed->channels >= 0, "a length is not negative");
    fuzz::require(parsed->data_offset <= size && parsed->data_offset <= npy_longest_header_bytes + 12,
                  "a header lies in the file");
    if (parsed->channels > std::numeric_limits<int>::max()) return 0;  // more than any header of ours has
    const NpyHeaderBytes ours = npy_header(parsed->type, parsed->count, static_cast<int>(parsed->channels));
    const Outcome<NpyHeader> again = parse_npy_header(ours);
    fuzz::require(bool(again), "our own header parses", again ? "" : to_text(again.error()));
    fuzz::require(again->type == parsed->type && again->count == parsed->count && again->channels == parsed->channels &&
                      again->data_offset == ours.size(),
                  "parse(header(x)) = x");
    return 0;
}
