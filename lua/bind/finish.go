package bind

import (
	"fmt"

	"lampbook/engine/model"
)

// Finish ends the plan when the scene has run to its end: values from the command line must have met a parameter and sheets must name
// tags that frames have; a scene without a sheet gets one of all its frames. The plan it returns is valid.
func (e *Env) Finish() (*model.Plan, error) {
	if e.fatal != nil {
		return nil, e.fatal
	}
	if err := e.checkOverrides(); err != nil {
		return nil, err
	}
	if len(e.plan.Frames) == 0 {
		return nil, fmt.Errorf("%s: the scene registers no frame: frame{ things = { … } } registers one", e.Scene)
	}
	if err := e.finishSheets(); err != nil {
		return nil, err
	}
	if err := e.plan.Validate(); err != nil {
		return nil, err
	}
	return &e.plan, nil
}
