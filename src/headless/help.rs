//! The text of `--help`.

/// What `parabound --help` prints.
pub const HELP: &str = "\
parabound: from a bond scan to constants, levels and the reach of the parabola

USAGE
  parabound [FILE...]                  the window, with these scans or the bundled sample
  parabound study FILE... [OPTIONS]    a summary on standard output, findings as JSON and tables
  parabound figure FILE --out F.svg    a picture for paper: SVG, PDF or PNG by the ending
  parabound recheck FINDINGS           compute a findings file again from its source and compare

WINDOW OPTIONS
  --renderer auto|gl|cpu     how it is painted; auto (the default) needs no GPU. PARABOUND_RENDERER
                             does the same; with PARABOUND_VERBOSE=1 the program says how it paints
  --theme light|dark         colours; the default follows the desktop
  --page NAME                page at the right: scan, constants, levels, fits, reach, thermal
  --picture F.png            paint the window once, without any display, and end
  --size 1400x900            size of that picture in points
  --scale 2                  pixels per point of that picture
  The study's options for reading, masses, window and asymptote work here too.

READING
  --curve NAME               energy column: its header name with or without the unit, any part of it
                             that fits only one, or its number counted from 1; 'all' for each
                             (default: the first)
  --length-column NAME       likewise, where the first column is not the bond length
  --energy-column NAME       an energy column, where the header does not tell; may be repeated
  --ignore-column NAME       a column to leave out; the other numbers are properties; may be repeated
  --length-unit UNIT         angstrom, bohr, pm, nm: where the file does not say, or says it wrong
  --energy-unit UNIT         hartree, eV, meV, kJ/mol, kcal/mol, cm-1
  --delimiter WORD           what separates the columns of a table, where it is not told rightly from its
                             lines: semicolons, tabs, commas, blanks
  --decimal-sign WORD        likewise what stands for decimals: point, comma
  --bond A,B                 the atoms whose distance is the bond length, numbered from 1, in files of
                             Cartesian coordinates with more than two atoms

  --length-pattern REGEX     with these two the files are text logs of one scan, one point
  --energy-pattern REGEX     each: regular expressions tried line by line, the number being what their first
                             group catches; the bond length may stand in the file name; a folder stands for its files.
                             Units are given by --length-unit and --energy-unit
  --match first|last         which match in a log counts (default last)
  --make 'NAME = RECIPE'     a curve made from energy columns; may be repeated. A recipe is a sum of columns,
                             with factors, and of constants with their unit: 'D = A - 0.5*B + 0.1 eV'; also
                             hf3(A,B,C; 2,3,4)     exponential limit of three cardinal numbers
                             hf2(A,B; 3,4; 1.63)   the same from two, with the exponent
                             corr2(A,B; 3,4)       inverse cube from two; a third part gives another power
                             Names with signs other than letters, digits, _ and . stand in quotes; '#2' is
                             the second column. The last one made is the default of --curve.
  --dry-run                  say what was understood of each file and compute nothing

MASSES
  --atoms A,B                the two atoms, with mass numbers where wanted: H,F or 2H,35Cl
  --charge Q                 charge of the molecule in units of e (default: what the file names, else 0)
  --reduced-mass U           reduced mass in u, instead of atoms
  Without atoms or a mass there are fits, derivatives and reach, but no levels.

STUDY
  --set-aside R,R,...        leave out the points at these bond lengths (unit of the file); not for the
                             window, where a click does it
  --window FROM,TO           fit window in angstrom (default: 15 % of r_e to each side)
  --asymptote E              energy of the separated atoms, in the file's unit and scale
  --fits LIST                the fits, with commas between (default: harmonic,morse,polynomial:6): harmonic,
                             polynomial:DEGREE:VARIABLE (x, xi, z or ogilvie), morse, extended_morse:ORDER:P,
                             varshni, rydberg, extended_rydberg, hulburt_hirschfelder
  --weights W                weights of the points in fits: equal (default); energy or energy=STEP, a smooth
                             step down at STEP cm-1 above the minimum; noise or noise=SIGMA, 1/sigma^2
                             with the estimated noise or SIGMA cm-1, which fixes s^2 = 1; column=NAME,
                             a column of the file; sigma=NAME, 1/sigma^2 with such a column (s^2 = 1);
                             rows=ROW:WEIGHT,... single rows, counted from 0, the others 1
  --bootstrap K              standard errors of fits by K resamplings of their residuals too
  --seed N                   seed of the resampling (default 1)
  --window-study             repeat the fits over all sensible windows and degrees, find the plateau
                             of omega_e and propose a window on it
  --tolerance T,T,...        of the reach: 5% or 0.05 of the parabola's energy and force; an energy such as
                             1kcal/mol, 4kJ/mol, 100cm-1 (default: 5%,1kcal/mol); levels=50cm-1 and
                             spacing=20cm-1 for the level and the spacing reach (default: 5% of omega_e)
  --averaging-width A        width in angstrom over which densities are averaged before they are compared
                             with the classical one (default: the zero-point amplitude)
  --density-levels V,V,...   the levels of --table densities, also ranges such as 0-5 (the default)
  --temperatures T,T,...     of the thermal averages, in K (default: 100 to 2000 K)
  --thermal-rotation         thermal averages with rotation too, E(v, J) solved for each J, and the
                             ideal gas at 1 bar
  --tail-power N             leading inverse power of the tail V_inf - C/r^N beyond the last point
  --tail-points M            fit that tail to the last M points (V_inf too, unless --asymptote is given)
  --tail-sensitivity         solve again with moved tails and say how many levels stay
  --rotation J,J,...         levels with these J too, and the quasi-bound ones with their widths; ranges
                             such as 0-20 can be given; with several J also a fitted table of Y_kl
  --lambda L                 Lambda of the electronic state, for the levels with rotation
  --isotopologues A,B;C,D    other isotopes on the same curve, with shifts: 2H,35Cl;1H,37Cl
  --settings F               all settings at once, as a findings or study file carries them;
                             other options given beside it win

RESULTS
  --out F                    findings (JSON); '-' for standard output. Replaces a findings file,
                             refuses any other file unless --overwrite is given
  --out-dir D                one findings file per study in this folder
  --table WHAT=F.csv         of all studies: levels, constants (one row a curve), curve (the points as read),
                             densities (of --density-levels), window-study (one row a fit, and asks for that
                             study) or thermal (one row a temperature); may be repeated
  --report F.html            one page: picture, sentence, constants, fits, levels, notices, settings
  --parameters F             parameters of the fits with value(uncertainty); LaTeX where F ends in .tex,
                             else text
  --force-constant-unit U    N/m (default), mdyn/angstrom, hartree/bohr^2, 'kJ/(mol nm^2)',
                             'kcal/(mol angstrom^2)': in the summary and with --parameters
  --convention half|full     half (default): V = 1/2 k x^2; full: V = k x^2; likewise
  --parameter-energy-unit U  unit of well depths and coefficients with --parameters (default cm-1)
  --parameter-length-unit U  unit of lengths and ranges with --parameters (default angstrom)
  --overwrite                replace existing files
  --timings                  seconds per stage as one JSON line on standard error; the fits run beside the
                             levels, so the stages may add up to more than the total
  --repeat K                 run each study K times for the timings (their median is given)

FIGURE
  --what NAME                curve (the default), gauge, residuals, ladders, thermal, window-study (and
                             asks for that study), comparison, birge-sponer
  --show-j J                 the curve or the ladders with the effective potential and the bound and
                             quasi-bound levels of this J
  --view NAME                near-minimum (the default), whole-well, fit-window, all-points
  --gauge MEASURE            what the gauge measures: energy (%, the default), energy-cm-1, force (%), force-cm-1
  --width-mm 140             width; the height follows
  --font-pt 9                font size
  --theme light|dark         colours (default: light, on white)
  --dpi 300                  of a PNG picture (needs the build with the window)
  The study's options about reading, masses, curve, fits and levels work here too.

RECHECK
  --source F                 the scan; without it, the file named in the findings is looked for beside
                             them. The same version must give every digit, another one 1e-9.

EXIT STATUS
  0 done; 2 wrong usage; 3 a file could not be read, understood or written; 4 understood, but a study
  is impossible (no minimum inside the scan, too few points); 5 a recheck found a difference. Of several
  files each is done; the status is the highest.

EXAMPLES
  parabound                                   look at the bundled sample
  parabound study lih.csv --atoms 7Li,H       summary
  parabound study scan.dat --length-unit bohr --energy-unit hartree --atoms C,O --out co.json
  parabound study *.csv --curve all --atoms H,F --table constants=hf.csv
  parabound figure lih.csv --atoms 7Li,H --width-mm 84 --font-pt 8 --out lih.pdf
";
