#include "reading.hpp"
#include "support/catch.hpp"

#include "rivalfold/data/sha256.hpp"

using namespace rivalfold;

// NIST, examples for FIPS 180-4 (SHA-256: one block, two blocks) and the long message of FIPS 180-2, appendix B.3;
// the value for the empty message is from memory of the same collection.
TEST_CASE("SHA-256 gives the published values", "[data]") {
    CHECK(sha256_hex("abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
    CHECK(sha256_hex("abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq") ==
          "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1");
    CHECK(sha256_hex("") == "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855");
    CHECK(sha256_hex(std::string(1000000, 'a')) == "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0");
}

TEST_CASE("a file has the SHA-256 of its bytes, however many blocks it takes", "[data]") {
    const TestFolder folder;
    std::string text;
    for (int i = 0; i < 300000; ++i) text += std::to_string(i);
    for (const std::size_t length : {std::size_t{0}, std::size_t{1}, std::size_t{1} << 18, text.size()})
        CHECK(sha256_hex_of_file(folder.write("x", std::string_view(text).substr(0, length))) ==
              sha256_hex(std::string_view(text).substr(0, length)));
    CHECK(faults_of([&] { sha256_hex_of_file(folder / "y.csv"); }) == (folder / "y.csv") + ": error: no such file");
}
