package scenes_test

import (
	"errors"
	"fmt"

	"annulet/scenes"
)

func Example() {
	document, err := scenes.Load("@first-light")
	if err != nil {
		fmt.Println(err)
		return
	}
	if err := document.Set("observer.inclination", "75deg"); err != nil {
		fmt.Println(err)
		return
	}
	scene := document.Scene()
	thetaG, _ := scene.ThetaG()
	fmt.Printf("%g deg, one M is %.3f uas\n", scene.Observer.Inclination, thetaG)
	// Output: 75 deg, one M is 3.525 uas
}

func ExampleParse() {
	_, err := scenes.Parse("near.toml", []byte("schema = 1\n[observer]\nradius = \"1.9 M\"\n"))
	var e *scenes.Error
	if errors.As(err, &e) {
		fmt.Println(e.Line, e.Column, e.Key)
	}
	fmt.Println(err)
	// Output:
	// 3 10 observer.radius
	// near.toml:3:10: observer.radius: out of range: a static observer must be outside the horizon; found "1.9 M"; allowed: "infinity" or more than 2 M
	//     radius = "1.9 M"
	//              ^
}
