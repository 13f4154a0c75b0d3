"""Tails, quantiles and noncentralities over wide ranges of the arguments, in ball arithmetic.

    python compute.py            recomputes every value of the files beside it and says what differs
    python compute.py --write    writes them

Library: python-flint 0.9.0 (Arb's balls). Each file lists its points: parameters, a tail (l: lower, u: upper), its probability p
and a double x close to the quantile; those were drawn once at random, shapes and degrees of freedom, probabilities and noncentralities
log-uniformly over the ranges in the file's definition. x came from the functions under test and is nothing but a place to look:
`lower` and `upper` are the tails at exactly that double, `quantile` is solved here for exactly that p by Newton's iteration, and
`noncentrality` for exactly that x and p. The precision is raised until the enclosing ball is below 1e-25 relative.

Incomplete gamma functions: the series P = x^a e^-x / Gamma(a+1) sum x^n / ((a+1)...(a+n)); incomplete beta functions:
I = x^a y^b / (a B(a,b)) sum (a+b)_n / (a+1)_n x^n, each with a geometric bound of the rest, and complements with enough digits;
Arb's own functions for small shapes. Noncentral: Poisson sums of these (Johnson, Kotz and Balakrishnan 1995, chapters 29 to 31),
from which weights below 1e-130 are left out.
"""
import json, math, sys
from pathlib import Path
from flint import arb, ctx

A = arb
INF = float("inf")
def refine(f, digits=25):
    p=160
    while True:
        ctx.prec=p
        v=f()
        if v.is_finite() and v.rel_accuracy_bits()>digits*3.33: return v
        p*=2
        if p>60000: raise Exception('precision')
half = lambda: arb(1) / 2
def gam_series(a,x):
    # lower regularised: x^a e^-x/Gamma(a+1) sum x^n/((a+1)...(a+n)); stop by geometric bound
    t=arb(1); s=arb(1); n=0; tol=arb(2)**(-ctx.prec)
    while True:
        n+=1
        t=t*(x/(a+n)); s=s+t
        if n%64==0:
            q=x/(a+n)
            if q<1 and t*q/(1-q) < s*tol: break
    s=s+(t*q/(1-q)).union(arb(0))
    return (a*x.log()-x-(a+1).lgamma()).exp()*s
def gam(a,x,side):  # regularized
    if a>1000:
        if side=='l': return gam_series(a,x)
        old=ctx.prec; ctx.prec=old+(1100 if x>a else 10)
        try: v=1-gam_series(a,x)
        finally: ctx.prec=old
        return +v
    if side=='l': return x.gamma_lower(a,1)
    return x.gamma_upper(a,1)
def bterms(a,b,x):
    S=lambda n: n*math.log(x)+math.lgamma(a+b+n)-math.lgamma(a+b)-math.lgamma(a+1+n)+math.lgamma(a+1)
    if x>=1 or x<=0: return 1e99 if x>=1 else 1
    pk=max(0.,(b*x-a*(1-x))/(1-x)); n=pk+10; top=max(0,S(pk))
    while S(n)>top-500 and n<1e9: n=pk+(n-pk)*2
    return n
def bet_series(a,b,x,y):
    t=arb(1); s=arb(1); n=0; tol=arb(2)**(-ctx.prec)
    c=a+b
    while True:
        t=t*(x*((c+n)/(a+1+n))); n+=1; s=s+t
        if n%64==0:
            q=(c+n)/(a+1+n)*x
            if not (q>x): q=x
            if q<1:
                rest=t*q/(1-q)
                if rest < s*tol: break
    s=s+rest.union(arb(0))
    return (a*x.log()+b*y.log()-(a+1).lgamma()-b.lgamma()+c.lgamma()).exp()*s
def bet(a,b,x,y,side):
    if a+b>1000:
        fa,fb,fx,fy=float(a),float(b),float(x),float(y)
        lower_small = fa*fy>=fb*fx
        nx,ny=bterms(fa,fb,fx) if fx<1 else bterms(fa,fb,1-fy),bterms(fb,fa,fy)
        old=ctx.prec
        use='l' if nx<=ny else 'u'
        extra = 0 if use==side else (1100 if (side=='l')==lower_small else 10)
        ctx.prec=old+extra
        try:
            v=bet_series(a,b,x,y) if use=='l' else bet_series(b,a,y,x)
            if use!=side: v=1-v
        finally: ctx.prec=old
        return +v
    return x.beta_lower(a,b,1) if side=='l' else y.beta_lower(b,a,1)
INF=float('inf')
def P(dist,x,par,side):
    x=arb(x)
    if dist=='norm':
        z = x if side=='u' else -x
        return (z/arb(2).sqrt()).erfc()/2
    if dist=='chi2': return gam(A(par[0])/2,x/2,side)
    if dist=='beta': return bet(A(par[0]),A(par[1]),x,1-x,side)
    if dist=='t':
        df=par[0]
        if df==INF: return P('norm',x,[],side)
        df=A(df); w=df+x*x
        neg = (x<0)
        if neg: side='l' if side=='u' else 'u'
        if side=='u': return bet(df/2,half(),df/w,x*x/w,'l')/2
        # lower with x>=0
        return 1-bet(df/2,half(),df/w,x*x/w,'l')/2
    if dist=='F':
        d1,d2=par
        if d2==INF: return gam(A(d1)/2,x*A(d1)/2,side)
        if d1==INF: return gam(A(d2)/2,A(d2)/x/2,'u' if side=='l' else 'l')
        d1,d2=A(d1),A(d2); w=d1*x+d2
        return bet(d1/2,d2/2,d1*x/w,d2/w,side)
def pois_range(m):
    m=float(m); d=28*math.sqrt(m)+260
    return max(0,int(m-28*math.sqrt(m))), int(m+d)
def mixture(weight0, wratio, j0, j1, side, I0, T0, ratio):
    """sum_{j0..j1} w_j I_j ; lower walks down from j1 (weight0,I0 at j1), upper up from j0.
    lower: I(j-1)=I(j)+T(j-1); upper: U(j+1)=U(j)+T(j)"""
    s=arb(0); w=weight0; I=I0; T=T0
    if side=='l':
        j=j1
        while True:
            s+=w*I
            if j==j0: break
            T=T/ratio(j-1); I=I+T; w=w/wratio(j-1); j-=1
    else:
        j=j0
        while True:
            s+=w*I
            if j==j1: break
            I=I+T; T=T*ratio(j); w=w*wratio(j); j+=1
    return s
def ncF(x,d1,d2,nc,side):   # d2 may be inf; x is F value (arb)
    lam=A(nc)/2; a=A(d1)/2
    if not isinstance(nc,arb) and nc==0: j0,j1=0,0
    else: j0,j1=pois_range(lam)
    j=j1 if side=='l' else j0
    w=(-lam+j*lam.log()-arb(j+1).lgamma()).exp() if j>0 else (-lam).exp()
    wr=lambda j: lam/(j+1)
    if d2==INF:
        z=a*x
        I=gam(a+j,z,side); T=((a+j)*z.log()-z-(a+j+1).lgamma()).exp()
        rt=lambda j: z/(a+j+1)
    else:
        b=A(d2)/2; W=a*x+b; u,v=a*x/W,b/W
        I=bet(a+j,b,u,v,side); T=((a+j)*u.log()+b*v.log()-(a+j+1).lgamma()-b.lgamma()+(a+b+j).lgamma()).exp()
        ab=a+b
        rt=lambda j: u*(ab+j)/(a+j+1)
    return mixture(w,wr,j0,j1,side,I,T,rt)
def ncT(t,df,d,side):
    t=A(t) if not isinstance(t,arb) else t
    d=A(d) if not isinstance(d,arb) else d
    if df==INF:
        z=t-d if side=='u' else d-t
        return (z/arb(2).sqrt()).erfc()/2
    if d<0: return ncT(-t,df,-d,'l' if side=='u' else 'u')
    if t==0 or d==0:
        if d==0: return P('t',t,[df],side)
        z=-d if side=='u' else d
        return (z/arb(2).sqrt()).erfc()/2
    old=ctx.prec
    neg=bool(t<0); lam=d*d/2
    s_=side
    if neg:
        ctx.prec=old+int(3*float(lam))+400
        lam=d*d/2
        s_='u'
    df=A(df); b=df/2; w=df+t*t; u,v=t*t/w,df/w
    j0,j1=pois_range(lam)
    if neg: j0=0; j1=int(6*float(lam))+600
    tot=arb(0)
    for par in (0,1):
        c=half()*par  # weights e^-lam lam^(j+c)/Gamma(j+c+1); shape 1/2+c+j
        j=j1 if s_=='l' else j0
        W=(-lam+(j+c)*lam.log()-(j+c+1).lgamma()).exp()
        a=half()+c; ab=a+b
        I=bet(a+j,b,u,v,s_)
        T=((a+j)*u.log()+b*v.log()-(a+j+1).lgamma()-b.lgamma()+(ab+j).lgamma()).exp()
        s=mixture(W,lambda j: lam/(j+c+1),j0,j1,s_,I,T,lambda j:u*(ab+j)/(a+j+1))
        tot = tot - s if (neg and par) else tot+s
    tot=tot/2
    if not neg and side=='l': tot+=(d/arb(2).sqrt()).erfc()/2
    if neg and side=='u': tot=1-tot
    ctx.prec=old
    return +tot
def NP(dist,x,par,side):
    if dist=='nct': return ncT(x,par[0],par[1],side)
    x=A(x) if not isinstance(x,arb) else x
    if dist=='ncx2': return ncF(x/A(par[0]),par[0],INF,par[1],side)
    return ncF(x,par[0],par[1],par[2],side)

NAMES = {
    "normal": ("norm", []), "student_t": ("t", ["df"]), "chi_squared": ("chi2", ["df"]), "beta": ("beta", ["a", "b"]),
    "fisher_f": ("F", ["df1", "df2"]), "noncentral_t": ("nct", ["df", "ncp"]),
    "noncentral_chi_squared": ("ncx2", ["df", "ncp"]), "noncentral_f": ("ncf", ["df1", "df2", "ncp"]),
}

def tail(dist, x, par, side):
    return NP(dist, x, par, side) if dist.startswith("nc") else P(dist, x, par, side)

def solve(f, start, p):
    """The argument at which the tail f is p: Newton's iteration on log f, from `start`, multiplicatively."""
    x = arb(start)
    for _ in range(40):
        here = refine(lambda: f(x), 40)
        ahead = refine(lambda: f(x * (1 + arb(2) ** -60)), 40)
        ctx.prec = 400
        slope = (ahead / here).log() * arb(2) ** 60
        step = ((here / p).log() / slope).mid()
        x = (x * (-max(min(step, arb(1)), arb(-1))).exp()).mid()
        if abs(step) < arb(10) ** -26:
            return x
    raise ArithmeticError("no convergence")

def text(value):
    ctx.prec = 400
    return value.str(22, radius=False)

def fill(name, case):
    dist, names = NAMES[name]
    par = [float(case[n]) for n in names]
    x, p, side = float(case["x"]), float(case["p"]), case["tail"]
    case["lower"] = text(refine(lambda: tail(dist, x, par, "l")))
    case["upper"] = text(refine(lambda: tail(dist, x, par, "u")))
    ctx.prec = 400
    case["quantile"] = text(solve(lambda z: tail(dist, z, par, side), x, arb(p)))
    if "near" in case:
        # x observed; the noncentrality at which the tail is p
        case["noncentrality"] = text(solve(lambda d: tail(dist, x, par[:-1] + [d], side), float(case["near"]), arb(p)))
    return case

def main():
    for name in NAMES:
        path = Path(__file__).parent / f"{name}.json"
        if not path.exists() or (len(sys.argv) > 2 and sys.argv[2] != name):
            continue
        file = json.loads(path.read_text())
        before = json.dumps(file["cases"])
        file["cases"] = [fill(name, case) for case in file["cases"]]
        print(name, len(file["cases"]), "as before" if json.dumps(file["cases"]) == before else "differs", flush=True)
        if "--write" in sys.argv:
            rows = ",\n  ".join(json.dumps(case) for case in file["cases"])
            top = ",\n ".join(f"{json.dumps(k)}: {json.dumps(v)}" for k, v in file.items() if k != "cases")
            path.write_text("{\n " + top + ",\n \"cases\": [\n  " + rows + "\n ]\n}\n")

main()
