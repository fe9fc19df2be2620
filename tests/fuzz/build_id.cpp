// Whatever a file holds, its build-id is hex digits or there is a reason; nothing outside it is read.
#include <string_view>

#include "runner/config/firmware_image.hpp"
#include "tests/fuzz/target.hpp"

using namespace halflsb;

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    const Outcome<std::string> found = build_id_of({reinterpret_cast<const char*>(data), size});
    if (!found) {
        fuzz::require(found.error().kind == ErrorKind::input && !found.error().problem.empty(),
                      "a refusal says what is wrong", to_text(found.error()));
        return 0;
    }
    fuzz::require(!found->empty() && found->size() % 2 == 0 && found->size() <= 2 * size, "two digits a byte");
    fuzz::require(found->find_first_not_of("0123456789abcdef") == std::string::npos, "lower-case hex digits", *found);
    return 0;
}
