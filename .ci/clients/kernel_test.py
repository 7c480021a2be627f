"""jupyter_kernel_test's conformance tests of the kernel."""

import unittest

import jupyter_kernel_test


class LevelsumKernelTests(jupyter_kernel_test.KernelTests):
    kernel_name = "levelsum"
    language_name = "go"
    file_extension = ".go"

    code_hello_world = 'import "fmt"\nfmt.Println("hello, world")'
    code_stderr = 'import ("fmt"; "os")\nfmt.Fprintln(os.Stderr, "test")'
    completion_samples = [
        {"text": "strings.HasPr", "matches": {"HasPrefix"}},
        {"text": "solid.Deb", "matches": {"Debye", "Debye1D", "Debye2D"}},
    ]
    code_inspect_sample = "math.Sqrt"
    complete_code_samples = ["x := 1", "1 + 1", "func f() int {\n\treturn 1\n}"]
    incomplete_code_samples = ["func f() int {", "x := []int{1,", "s := `raw"]
    invalid_code_samples = ["x := )", "func 1() {}"]
    code_generate_error = 'panic("as wanted")'
    code_execute_result = [
        {"code": "6 * 7", "result": "42"},
        {"code": 'x := "level"\nx + "sum"', "result": "levelsum"},
    ]
    code_display_data = [
        {"code": 'import "levelsum/display"\ndisplay.Show(display.Number{Name: "x", Value: 1.5})', "mime": "text/plain"},
        {"code": 'import "levelsum/display"\ndisplay.Show(display.Number{Name: "x", Value: 1.5})', "mime": "text/html"},
    ]
    code_clear_output = 'import "levelsum/display"\ndisplay.Current().Clear(true)'
    supported_history_operations = ("tail", "range", "search")
    code_history_pattern = "6 *"
    code_page_something = "kernel.Journal()"


if __name__ == "__main__":
    unittest.main()
