using GainMargin;

static ClosedLoop Two(double[] m, double[] d, double[] k, params LoopSetting[] loops)
    => ClosedLoop.Create(ElasticStructure.FromRowMajor(["x", "y"], m, d, k), ControlLaw.Of(loops));

// P07
{
    double c = 0.06, w = 1, q1 = 0.1;
    var loop = FeedbackLoop.Create("q", Sensor.At("x"), Actuator.At("y"), new() { Position = -1 });
    var cl = Two([1, 0, 0, 1], [c, 0, 0, c], [w * w, q1, 0, w * w], new LoopSetting(loop, 0.01));
    Console.WriteLine(GainSweep.Run(GainPath.OneLoop(cl, "q", GainRange.Between(0, 1))));
    Console.WriteLine($"expected {c * c * w * w / q1}");
}
// P22
{
    double c = 0.05;
    var loop = FeedbackLoop.Create("v", Sensor.At("y"), Actuator.At("x"), new() { Rate = 1 });
    var cl = Two([1, 0, 0, 1], [c, -c, -c, c], [1, -1, -1, 1], new LoopSetting(loop, 0.1));
    Console.WriteLine(GainSweep.Run(GainPath.OneLoop(cl, "v", GainRange.Between(0, 1))));
    Console.WriteLine(GainSweep.Run(GainPath.OneLoop(cl, "v", GainRange.Between(-1, 1))));
    Console.WriteLine(ClosedLoopAnalysis.Split(cl));
    foreach (var r in ClosedLoopAnalysis.Spectrum(cl).Roots) Console.WriteLine(r);
}
// P23
{
    var loop = FeedbackLoop.Create("g", Sensor.At("y"), Actuator.At("x"), new() { Position = -1 });
    var cl = Two([1, 0, 0, 1], [0.02, 0, 0, 0.5], [1, 0, -1.44, 1.44], new LoopSetting(loop, 0.5));
    Console.WriteLine(GainSweep.Run(GainPath.OneLoop(cl, "g", GainRange.Between(0, 3))));
}
// undamped, non-collocated rate
{
    var loop = FeedbackLoop.Create("v", Sensor.At("y"), Actuator.At("x"), new() { Rate = 1 });
    var cl = Two([1, 0, 0, 1], [0, 0, 0, 0], [2, -1, -1, 1], new LoopSetting(loop, 0.1));
    Console.WriteLine(GainSweep.Run(GainPath.OneLoop(cl, "v", GainRange.Between(0, 1))));
}
// acceleration through infinity
{
    var s = ElasticStructure.FromRowMajor(["x"], [1], [0.1], [1]);
    var cl = ClosedLoop.Create(s, ControlLaw.Of(new LoopSetting(FeedbackLoop.Create("a", Sensor.At("x"), Actuator.At("x"), new() { Acceleration = 1 }), 0.1)));
    Console.WriteLine(GainSweep.Run(GainPath.OneLoop(cl, "a", GainRange.Between(-2, 1))));
}
// touch: D = 1 - 2f + f^2
{
    var s = ElasticStructure.FromRowMajor(["x"], [1], [1], [4]);
    var a = FeedbackLoop.Create("in", Sensor.At("x"), Actuator.At("x"), new() { Rate = 1 });
    var b = FeedbackLoop.Create("out", Sensor.At("x"), Actuator.At("x"), new() { Rate = 1 });
    var cl = ClosedLoop.Create(s, ControlLaw.Cascade(new(a, -2), new(b, -0.5)));
    Console.WriteLine(GainSweep.Run(GainPath.CommonFactor(cl, GainRange.Between(0, 3.1))));
}
// lossless Ziegler-like by one loop: K = [[2-p, p-1],[-1,1]] => K0 + p [-1, 1; 0 0]
{
    var loop = FeedbackLoop.Create("p", Sensor.Difference("x", "y"), Actuator.At("x"), new() { Position = -1 });
    var cl = Two([3, 1, 1, 1], [0, 0, 0, 0], [2, -1, -1, 1], new LoopSetting(loop, 0.5));
    Console.WriteLine(GainSweep.Run(GainPath.OneLoop(cl, "p", GainRange.Between(0, 8))));
    var cl2 = Two([3, 1, 1, 1], [0.2, -0.1, -0.1, 0.1], [2, -1, -1, 1], new LoopSetting(loop, 0.5));
    Console.WriteLine(GainSweep.Run(GainPath.OneLoop(cl2, "p", GainRange.Between(0, 8))));
    Console.WriteLine($"expected {41.0 / 28 + 0.005}");
}
